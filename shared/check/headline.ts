import type { DerivedResult, Deviation } from './check-schema.ts';
import { counted } from './name-list.ts';

/** What a headline counts: elements where something is off, points elsewhere. */
export interface HeadlineCounts {
	readonly points: number;
	readonly elementsOff: number;
	readonly tooClose: number;
	readonly undecided: number;
	readonly notSeen: number;
	readonly withoutRule: number;
}

/** Counts a check's deviations for its headline. An element counts once, however many of its points are off; it is off as well where a derived result is. */
export function headlineCounts(
	deviations: readonly Pick<Deviation, 'elementId' | 'verdict'>[],
	derived: readonly Pick<DerivedResult, 'elementId' | 'verdict'>[] = [],
): HeadlineCounts {
	const count = (verdict: Deviation['verdict']): number => deviations.filter((deviation) => deviation.verdict === verdict).length;
	return {
		points: deviations.length,
		elementsOff: new Set([...deviations, ...derived].filter(({ verdict }) => verdict === 'outside').map(({ elementId }) => elementId)).size,
		tooClose: count('too-close-to-call'),
		undecided: count('undecided'),
		notSeen: count('not-measured'),
		withoutRule: count('no-tolerance'),
	};
}

/**
 * The consequence of a check as one sentence, the page's heading:
 * "Pour 7 is not ready: 6 elements off, 9 points too close, 14 not seen"; without a pour "6 elements off, 9 points too close to call, 14 not seen".
 * A check can say that a pour is not ready; that it is takes more (flags, signatures), so that is never said here.
 */
export function checkHeadline(counts: HeadlineCounts, pourName: string | null = null): string {
	const { points, elementsOff, tooClose, undecided, notSeen, withoutRule } = counts;
	const lead = pourName === null ? '' : `${pourName}: `;
	if (points === 0) return `${lead}${lead === '' ? 'No' : 'no'} checkpoints to measure`;
	if (notSeen === points) return `${lead}${lead === '' ? 'Nothing' : 'nothing'} measured yet, ${counted(points, 'point')} not seen`;
	const parts = [
		elementsOff > 0 ? `${counted(elementsOff, 'element')} off` : null,
		tooClose > 0 ? `${counted(tooClose, 'point')} too close${pourName === null ? ' to call' : ''}` : null,
		undecided > 0 ? `${undecided} undecided` : null,
		notSeen > 0 ? `${notSeen} not seen` : null,
		withoutRule > 0 ? `${withoutRule} without a rule` : null,
	].filter((part) => part !== null);
	if (parts.length === 0)
		return `${lead}${points === 1 ? `${lead === '' ? 'The' : 'the'} one point is within` : `${lead === '' ? 'All' : 'all'} ${points} points are within`}`;
	return pourName === null ? parts.join(', ') : `${pourName} is not ready: ${parts.join(', ')}`;
}
