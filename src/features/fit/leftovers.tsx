import type { PairsOfSetup } from '#shared/fit/contract.ts';
import { listed } from './cures.ts';

interface LeftoversProps {
	pairs: PairsOfSetup;
	/** Used in part, which this kind of fit cannot. */
	leftOut: readonly string[];
}

/** What has no partner, what is left out, what was taken for something, and why σ are not used. */
export function Leftovers({ pairs, leftOut }: LeftoversProps) {
	const lines = [
		leftOut.length > 0 &&
			`${listed(leftOut)} ${leftOut.length === 1 ? 'is' : 'are'} used in part only, and this fit needs pairs whole: left out of it.`,
		...(pairs.relabellings ?? []).map(({ target, mark, reason }) => `Target ${target} is taken for ${mark}. ${reason}`),
		...(pairs.notes ?? []),
		pairs.targetsWithoutControl.length > 0 && `Sighted as a target, but not in the control: ${pairs.targetsWithoutControl.join(', ')}.`,
		pairs.controlWithoutTarget.length > 0 && `In the control, not sighted from here: ${pairs.controlWithoutTarget.join(', ')}.`,
		pairs.sigmaNote,
	].filter((line) => typeof line === 'string');
	if (lines.length === 0) return null;
	return (
		<ul className="m-0 flex list-none flex-col gap-1 p-0 text-second">
			{lines.map((line) => (
				<li key={line}>{line}</li>
			))}
		</ul>
	);
}
