import type { PairsOfSetup, Relabelling } from '#shared/fit/contract.ts';
import { Button } from '#src/ui/button.tsx';
import { listed } from './cures.ts';

interface LeftoversProps {
	pairs: PairsOfSetup;
	/** Used in part, which this kind of fit cannot. */
	leftOut: readonly string[];
	/** Null: this person gives no labels. */
	onRelabel: { ask: () => void; put: (relabellings: readonly Relabelling[]) => void } | null;
}

/** What has no partner, what is left out, what was taken for something, and why σ are not used. */
export function Leftovers({ pairs, leftOut, onRelabel }: LeftoversProps) {
	const lines = [
		leftOut.length > 0 &&
			`${listed(leftOut)} ${leftOut.length === 1 ? 'is' : 'are'} used in part only, and this fit needs pairs whole: left out of it.`,
		...(pairs.notes ?? []),
		pairs.targetsWithoutControl.length > 0 && `Sighted as a target, but not in the control: ${pairs.targetsWithoutControl.join(', ')}.`,
		pairs.controlWithoutTarget.length > 0 && `In the control, not sighted from here: ${pairs.controlWithoutTarget.join(', ')}.`,
		pairs.sigmaNote,
	].filter((line) => typeof line === 'string');
	const given = pairs.relabellings ?? [];
	if (lines.length === 0 && given.length === 0 && onRelabel === null) return null;
	return (
		<div className="text-second">
			<ul className="m-0 flex list-none flex-col gap-1 p-0">
				{given.map(({ target, mark, reason }) => (
					<li key={target} className="flex flex-wrap items-center gap-x-3 gap-y-1">
						<span>
							Target {target} is taken for {mark}. {reason}
						</span>
						{onRelabel && <Button onClick={() => onRelabel.put(given.filter((one) => one.target !== target))}>Leave it as labelled</Button>}
					</li>
				))}
				{lines.map((line) => (
					<li key={line}>{line}</li>
				))}
			</ul>
			{onRelabel && (pairs.targets ?? []).length > 0 && (
				<p className="mt-2.5 mb-0">
					<Button onClick={onRelabel.ask}>Give a target another label</Button>
				</p>
			)}
		</div>
	);
}
