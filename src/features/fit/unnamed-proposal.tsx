import { useMemo } from 'react';
import type { PairsOfSetup, Relabelling } from '#shared/fit/contract.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { useFitSearch } from './use-fit-search.ts';

interface UnnamedProposalProps {
	pairs: PairsOfSetup;
	levelling: 'levelled' | 'free';
	/** Null: this person changes nothing here. */
	onTake: ((relabellings: readonly Relabelling[]) => void) | null;
}

/** A target this far from a mark is not that mark, metres (own). */
const toleranceM = 0.02;
const mostShown = 6;

/** Where the names of targets meet no control: the matches that their mutual distances allow, all that are equally good. */
export function UnnamedProposal({ pairs, levelling, onTake }: UnnamedProposalProps) {
	const { loose } = pairs;
	const least = levelling === 'free' ? 4 : 3;
	const isWanted = pairs.pairs.length < 3 && loose !== undefined && loose.targets.length >= least && loose.control.length >= least;
	const search = useMemo(
		() => (isWanted ? { task: 'match' as const, input: { fit: levelling, ...loose, toleranceM } } : null),
		[isWanted, levelling, loose],
	);
	const { answer, isSearching } = useFitSearch<'match'>(search);
	if (!isWanted) return null;
	if (isSearching || answer === null)
		return <Notice kind="note" title={`${counted(loose.targets.length, 'target')} of other names: looking for their marks by distances`} />;
	const { matches } = answer;
	const [first] = matches;
	if (!first)
		return (
			<Notice kind="note" title="No target has a control point’s name, and their distances fit none either">
				Name the targets in the file as the marks are named, or bring the control they belong to.
			</Notice>
		);
	return (
		<FindingCard
			title={
				matches.length === 1
					? `Distances say which marks these are: ${first.pairs.length} of ${counted(loose.targets.length, 'target')} match`
					: `${matches.length} matches are equally good: ${first.pairs.length} targets each. None is picked`
			}
		>
			{matches.length > 1 && (
				<p className="mt-0 mb-2">Distances alone cannot tell a symmetric group of marks from itself. A target that you know decides.</p>
			)}
			<ul className="m-0 flex list-none flex-col gap-3 p-0">
				{matches.slice(0, mostShown).map((match) => (
					<li
						key={match.pairs.map(({ target, control }) => `${target} ${control}`).join()}
						className="flex flex-wrap items-center gap-x-3 gap-y-1"
					>
						<Button
							weight={matches.length === 1 ? 'act' : 'quiet'}
							whyNot={onTake === null ? 'A site engineer names targets.' : null}
							onClick={() =>
								onTake?.(
									match.pairs.map(({ target, control, misfitM }) => ({
										target,
										mark: control,
										reason: `By mutual distances: ${match.pairs.length} targets agree, rms ${(match.rmsM * 1000).toFixed(1)} mm; this one misses by ${(misfitM * 1000).toFixed(1)} mm.`,
									})),
								)
							}
						>
							Take this match
						</Button>
						<span className="min-w-0 text-ink">
							{match.pairs.map(({ target, control }) => `${target} is ${control}`).join(', ')}
							<span className="block text-strip text-second">
								rms {(match.rmsM * 1000).toFixed(1)} mm
								{match.strangers.length > 0 && ` · no mark for ${match.strangers.join(', ')}`}
							</span>
						</span>
					</li>
				))}
			</ul>
			{matches.length > mostShown && <p className="mb-0">And {matches.length - mostShown} more, as good as these.</p>}
		</FindingCard>
	);
}
