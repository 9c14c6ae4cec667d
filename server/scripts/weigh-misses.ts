import type { Deviation } from '#shared/check/check-schema.ts';
import type { Displaced } from './simulate-survey.ts';

/** What came back of a simulated survey, counted: normalised misses, and what was said of what was planted where. */
export interface MissCount {
	/** Single misses: a mark has two. */
	misses: number;
	sum: number;
	sumOfSquares: number;
	largest: number;
	checkpoints: number;
	notMeasured: number;
	/** Planted well inside or well outside its limit, and told otherwise. */
	wrongVerdicts: number;
	/** Faces and levels planted on their limit: too close to call by right with a probability of 95.45 %. */
	onLimit: number;
	tooClose: number;
	/** Planted on the limit and told to be outside or within: at most 2.3 % each by right, where a mark's limit is a circle a little more. */
	toldOtherwise: number;
}

export const noMisses = (): MissCount => ({
	misses: 0,
	sum: 0,
	sumOfSquares: 0,
	largest: 0,
	checkpoints: 0,
	notMeasured: 0,
	wrongVerdicts: 0,
	onLimit: 0,
	tooClose: 0,
	toldOtherwise: 0,
});

/** The misses of one checkpoint over their u: one along its direction; of a mark two, whitened by the factor of Cholesky of its covariance. */
export function normalisedMisses(
	{
		deviationMm,
		offsetMm,
		covarianceMm2,
		expandedUncertaintyMm,
	}: Pick<Deviation, 'deviationMm' | 'offsetMm' | 'covarianceMm2' | 'expandedUncertaintyMm'>,
	truth: Pick<Displaced, 'deviationMm' | 'offsetMm'>,
): number[] {
	if (deviationMm === null) return [];
	if (truth.offsetMm !== null && offsetMm !== null && covarianceMm2 !== null) {
		const [east, north] = [offsetMm[0] - truth.offsetMm[0], offsetMm[1] - truth.offsetMm[1]];
		const sigmaEast = Math.sqrt(covarianceMm2[0][0]);
		const shared = covarianceMm2[0][1] / sigmaEast;
		const first = east / sigmaEast;
		return [first, (north - shared * first) / Math.sqrt(covarianceMm2[1][1] - shared ** 2)];
	}
	return expandedUncertaintyMm === null ? [] : [(deviationMm - truth.deviationMm) / (expandedUncertaintyMm / 2)];
}

/** Adds one checkpoint to a count. */
export function countMiss(count: MissCount, deviation: Deviation, truth: Displaced): void {
	count.checkpoints++;
	if (deviation.deviationMm === null) {
		count.notMeasured++;
		return;
	}
	for (const miss of normalisedMisses(deviation, truth)) {
		count.misses++;
		count.sum += miss;
		count.sumOfSquares += miss * miss;
		count.largest = Math.max(count.largest, Math.abs(miss));
	}
	if (truth.planted === 'inside' && deviation.verdict !== 'within') count.wrongVerdicts++;
	if (truth.planted === 'outside' && deviation.verdict !== 'outside') count.wrongVerdicts++;
	if (truth.planted !== 'on-limit' || truth.offsetMm !== null) return;
	count.onLimit++;
	if (deviation.verdict === 'too-close-to-call') count.tooClose++;
	else count.toldOtherwise++;
}

/** All of `more` added to `count`. */
export function addMisses(count: MissCount, more: MissCount): void {
	for (const key of Object.keys(count) as (keyof MissCount)[]) {
		if (key === 'largest') count.largest = Math.max(count.largest, more.largest);
		else count[key] += more[key];
	}
}

/** Root mean square of the normalised misses: 1 where U is neither too large nor too small. */
export const spreadOf = ({ sumOfSquares, misses }: MissCount): number => Math.sqrt(sumOfSquares / misses);
