import type { StoredElement } from '#shared/model/contract.ts';
import { counted } from '#src/lib/format.ts';

interface WithoutCheckpointsProps {
	reasons: readonly { why: string; elements: readonly StoredElement[] }[];
	onElement: (elementId: string) => void;
}

const mostShown = 40;

/** What got no checkpoint and why: one line a reason, the commonest first, the elements within. */
export function WithoutCheckpoints({ reasons, onElement }: WithoutCheckpointsProps) {
	if (reasons.length === 0) return null;
	const total = reasons.reduce((sum, { elements }) => sum + elements.length, 0);
	return (
		<section aria-labelledby="without-checkpoints">
			<h2 id="without-checkpoints" className="mt-0 mb-2 text-h2 font-strong">
				{counted(total, 'element')} {total === 1 ? 'has' : 'have'} no checkpoint
			</h2>
			<div className="sheet">
				{reasons.map(({ why, elements }) => (
					<details key={why} className="border-b border-b-hair px-3.5 last:border-b-0">
						<summary className="flex min-h-11 cursor-pointer items-center gap-3 py-1.5 pointer-coarse:min-h-12">
							<span className="w-12 shrink-0 text-right font-strong">{elements.length}</span>
							<span className="min-w-0">because {why}</span>
						</summary>
						<div className="flex flex-wrap gap-x-3 pb-2.5 pl-15">
							{elements.slice(0, mostShown).map((element) => (
								<button
									key={element.elementId}
									type="button"
									onClick={() => onElement(element.elementId)}
									className="min-h-9 text-left text-action underline underline-offset-3 pointer-coarse:min-h-12"
								>
									{element.title}
								</button>
							))}
							{elements.length > mostShown && <span className="self-center text-second">and {elements.length - mostShown} more</span>}
						</div>
					</details>
				))}
			</div>
		</section>
	);
}
