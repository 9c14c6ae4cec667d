import type { FitObservations } from './fit-observations.ts';

/**
 * Pairs of the same σ on both sides and the same known coordinates share one Σ at any pose: it is formed and inverted once for all of them.
 * A survey has one such group, or a few; where every pair has its own σ, as many groups as pairs.
 */
export interface SigmaGroups {
	/** The pairs, group by group. */
	readonly order: Int32Array;
	/** Where each group ends in `order`. */
	readonly ends: Int32Array;
	/** The group of each pair. */
	readonly groupOf: Int32Array;
}

const found = new WeakMap<FitObservations, SigmaGroups>();

/** The groups of these observations; their variances may not change from the first call on. */
export function sigmaGroupsOf(observations: FitObservations): SigmaGroups {
	let groups = found.get(observations);
	if (groups === undefined) {
		groups = groupPairs(observations);
		found.set(observations, groups);
	}
	return groups;
}

/** To so many groups each pair is compared with all of them; the rest go one by one, so that the work stays in proportion to the pairs. */
const MOST_SHARED = 16;

function groupPairs(observations: FitObservations): SigmaGroups {
	const { count } = observations;
	const groupOf = new Int32Array(count);
	const firstOf: number[] = [];
	for (let i = 0; i < count; i++) {
		const shared = Math.min(firstOf.length, MOST_SHARED);
		let group = 0;
		while (group < shared && !isAlike(observations, firstOf[group]!, i)) group++;
		if (group === shared) {
			group = firstOf.length;
			firstOf.push(i);
		}
		groupOf[i] = group;
	}
	const ends = new Int32Array(firstOf.length);
	for (let i = 0; i < count; i++) ends[groupOf[i]!]!++;
	for (let group = 1; group < ends.length; group++) ends[group]! += ends[group - 1]!;
	// Filled from the back, so that pairs keep their order within a group.
	const next = ends.slice();
	const order = new Int32Array(count);
	for (let i = count - 1; i >= 0; i--) order[--next[groupOf[i]!]!] = i;
	return { order, ends, groupOf };
}

function isAlike({ surveyVariance, controlVariance, known }: FitObservations, i: number, j: number): boolean {
	if (known[i] !== known[j]) return false;
	for (let k = 0; k < 3; k++) {
		if (surveyVariance[3 * i + k] !== surveyVariance[3 * j + k] || controlVariance[3 * i + k] !== controlVariance[3 * j + k]) return false;
	}
	return true;
}
