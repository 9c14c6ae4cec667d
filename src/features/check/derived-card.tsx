import { type ReactNode, useMemo, useRef } from 'react';
import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckElement } from '#shared/check/contract.ts';
import type { DerivedRow } from '#shared/check/derived/derived-row.ts';
import { useElementWidth } from '#src/lib/element-width.ts';
import { signedMm } from '#src/lib/format.ts';
import { rodScaleMm } from '#src/ui/rod.tsx';
import { conformityText, JudgedSentence } from './deviation-card.tsx';
import { DeviationRod } from './deviation-table.tsx';

interface DerivedCardProps {
	row: DerivedRow;
	element: CheckElement | null;
	/** Of the check: those it is made from are named. */
	deviations: readonly Deviation[];
	onChoose: (checkpointId: string) => void;
	acts?: ReactNode;
}

/** So many of the places a result is made from are named before the rest is counted. */
const mostNamed = 6;

/** What is known of one derived result: the rod large, the sentence, and the places it is made from, each to be chosen. */
export function DerivedCard({ row, element, deviations, onChoose, acts }: DerivedCardProps) {
	const box = useRef<HTMLDivElement>(null);
	const widthPx = useElementWidth(box, 486);
	const parts = useMemo(() => {
		const from = new Set(row.from);
		return deviations.filter(({ checkpointId }) => from.has(checkpointId));
	}, [deviations, row.from]);
	return (
		<section className="sheet px-4 py-3.5 max-tablet:py-2.5" aria-label="The chosen result">
			<div className="flex items-start gap-3">
				<h2 className="m-0 min-w-0 flex-1 text-h2 leading-snug font-strong">{element?.title ?? 'Element of an earlier revision'}</h2>
				{acts}
			</div>
			<div ref={box} className="my-1.5 max-tablet:my-0.5">
				<DeviationRod deviation={row} scaleMm={rodScaleMm([row.limitsMm], [row.deviationMm])} widthPx={widthPx} heightPx={46} />
			</div>
			<div aria-live="polite">
				<JudgedSentence deviation={row} />
			</div>
			<dl className="m-0 mt-2 grid grid-cols-[auto_1fr] gap-x-3 gap-y-0.5 text-small text-second">
				{row.conformity !== null && (
					<>
						<dt>Conforms</dt>
						<dd className="m-0">with a probability of {conformityText(row.conformity)}</dd>
					</>
				)}
				<dt>Made from</dt>
				<dd className="m-0">
					<ul className="m-0 list-none p-0">
						{parts.slice(0, mostNamed).map((part) => (
							<li key={part.checkpointId}>
								<button
									type="button"
									className="min-h-6 cursor-pointer border-0 bg-transparent p-0 text-left text-action underline underline-offset-3"
									onClick={() => onChoose(part.checkpointId)}
								>
									{part.label}
								</button>{' '}
								{signedMm(part.deviationMm, part.expandedUncertaintyMm)}
							</li>
						))}
						{parts.length > mostNamed && <li>and {parts.length - mostNamed} more</li>}
					</ul>
				</dd>
				<dt>Known to</dt>
				<dd className="m-0">with what its places share by fit and set-up taken out where it cancels</dd>
			</dl>
		</section>
	);
}
