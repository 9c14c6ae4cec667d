import { count } from '#src/lib/format.ts';
import { Button } from './button.tsx';

interface ProgressProps {
	/** In words: "Reading elements". */
	doing: string;
	done: number;
	/** 0: not known how much there is. */
	of: number;
	/** How the amounts are written; plain counts by default (give `bytes` for an upload). */
	amount?: (value: number) => string;
	onCancel?: (() => void) | undefined;
	isCancelling?: boolean;
	/** Said below: "You can leave this page; it goes on." */
	note?: string;
}

/** What long work does, how far it is, and the press that ends it. */
export function Progress({ doing, done, of, amount = count, onCancel, isCancelling = false, note }: ProgressProps) {
	const isKnown = of > 0;
	return (
		<section className="sheet flex flex-wrap items-center gap-x-4 gap-y-2 px-4.5 py-4">
			<div className="min-w-0 flex-1 basis-60">
				<div className="flex justify-between gap-4" aria-live="polite">
					<span className="font-medium">{isCancelling ? 'Stopping' : doing}</span>
					{isKnown && (
						<span className="text-second">
							{amount(done)} of {amount(of)}
						</span>
					)}
				</div>
				<progress
					aria-label={doing}
					max={isKnown ? of : undefined}
					value={isKnown ? Math.min(done, of) : undefined}
					className="mt-2 block h-2.5 w-full appearance-none overflow-hidden rounded-corner border border-field bg-hair [&::-moz-progress-bar]:bg-action [&::-webkit-progress-bar]:bg-hair [&::-webkit-progress-value]:bg-action"
				/>
				{note && <p className="m-0 mt-2 text-small text-second">{note}</p>}
			</div>
			{onCancel && (
				<Button onClick={onCancel} isBusy={isCancelling}>
					Stop
				</Button>
			)}
		</section>
	);
}
