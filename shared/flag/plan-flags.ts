import { rejudge } from '../check/rejudge.ts';
import type { CheckpointStanding } from '../check/standing.ts';
import type { Characteristic } from '../tolerance/sheet-schema.ts';
import type { FlagFinding } from './flag-life.ts';
import type { WorstDeviation } from './flag-schema.ts';

/** What the published checks together say of one element and kind. */
export interface KindStanding extends FlagFinding {
	readonly modelId: string;
	readonly globalId: string;
	readonly kind: Characteristic;
	/** Its worst place, with its sign. */
	readonly worst: WorstDeviation;
	/** Checkpoints with a verdict, and those of them that are not within. */
	readonly pointCount: number;
	readonly offCount: number;
	/** The survey of the check it rests on. */
	readonly surveyId: string;
}

/** An element and kind as one text. */
export function flagKey(one: { modelId: string; globalId: string; kind: string }): string {
	return `${one.modelId}\n${one.globalId}\n${one.kind}`;
}

export interface KindStandingOptions {
	/**
	 * Until when what was measured of an element and kind speaks of work that has been put right since (ms UTC; null: never put right), and
	 * whether a check was published before that.
	 */
	readonly isBeforePutRight?: (key: string, newest: CheckpointStanding['newest']) => boolean;
}

/**
 * Flags are by element and kind: outside where one of its checkpoints is, else too close to call, else undecided, else within. Points that were
 * put right since they were measured are passed over; where only such are off, nothing is known yet and the element and kind is left away.
 * Not measured, without a rule, and on a fit that is adopted no more count for nothing.
 */
export function kindStandings(standings: readonly CheckpointStanding[], { isBeforePutRight }: KindStandingOptions = {}): KindStanding[] {
	const groups = new Map<string, CheckpointStanding[]>();
	for (const standing of standings) {
		const { deviation, isFitAdopted } = standing.newest;
		if (!isFitAdopted || deviation.deviationMm === null || deviation.limitsMm === null) continue;
		const key = flagKey({ ...standing, kind: deviation.characteristic });
		const group = groups.get(key);
		if (group === undefined) groups.set(key, [standing]);
		else group.push(standing);
	}
	return [...groups].flatMap(([key, group]) => {
		const off = group.filter(({ newest }) => newest.deviation.verdict !== 'within');
		const known = off.filter(({ newest }) => isBeforePutRight?.(key, newest) !== true);
		if (off.length > 0 && known.length === 0) return [];
		return [kindStandingOf(group, known)];
	});
}

function kindStandingOf(group: readonly CheckpointStanding[], off: readonly CheckpointStanding[]): KindStanding {
	const order = ['outside', 'too-close-to-call', 'undecided'] as const;
	const verdict = order.find((one) => off.some(({ newest }) => newest.deviation.verdict === one)) ?? 'within';
	const telling = off.length > 0 ? off : group;
	const [worst] = telling.toSorted((a, b) => awayMm(b) - awayMm(a)) as [CheckpointStanding];
	const resting = telling.toSorted((a, b) => b.newest.checkNumber - a.newest.checkNumber)[0]!;
	return {
		modelId: worst.modelId,
		globalId: worst.globalId,
		kind: worst.newest.deviation.characteristic,
		worst: worstOf(worst.newest.deviation),
		verdict,
		worstMm: awayMm(worst),
		isInsideAlone: telling.every(({ newest }) => rejudge(newest.deviation, 'simple').verdict === 'within'),
		pointCount: group.length,
		offCount: off.length,
		checkId: resting.newest.checkId,
		surveyId: resting.newest.surveyId,
	};
}

/** What a list's rod shows of a deviation; without a verdict it would not be here. */
function worstOf(deviation: CheckpointStanding['newest']['deviation']): WorstDeviation {
	const { label, deviationMm, expandedUncertaintyMm, limitsMm, offsetMm, direction, verdict, beyondMm } = deviation;
	const judged = verdict === 'not-measured' || verdict === 'no-tolerance' ? 'within' : verdict;
	return { label, deviationMm: deviationMm ?? 0, expandedUncertaintyMm, limitsMm, offsetMm, direction, verdict: judged, beyondMm };
}

const awayMm = ({ newest }: CheckpointStanding): number => Math.abs(newest.deviation.deviationMm ?? 0);
