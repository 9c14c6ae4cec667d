import { chiSquareQuantile } from '#shared/geometry/chi-square.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { varianceRatioTail } from '#shared/geometry/student-t.ts';
import { agree, distanceAgreement, mostAround } from './distance-agreement.ts';
import { type FitObservations, KNOWN_ALL, KNOWN_HEIGHT, KNOWN_PLAN, pickPairs } from './fit-observations.ts';
import { type FitTrial, sidakLevel, tryFit } from './fit-trial.ts';
import { largestAgreement } from './largest-agreement.ts';
import { leastPairs } from './least-pairs.ts';
import { prediction } from './prediction.ts';
import { quickFit } from './solve-fit.ts';

/** All minimal subsets are tried to here, a seeded sample beyond. */
const EXHAUSTIVE_PAIRS = 40;
const SAMPLES = 2000;
/** So many of the largest groups are worked out in full: among many pairs the largest few are all but the same. */
const WORKED_OUT = 24;
const WORKED_OUT_OF_MANY = 6;
/** Groups smaller than the largest by more than this are not looked for where distances tell beforehand. */
const SMALLER_GROUPS = 3;

/** Pairs that agree with one another, and the fit of them alone. `kept` are indices into the observations, rising. */
export interface Consensus {
	kept: number[];
	trial: FitTrial;
}

/**
 * Groups of pairs that agree, largest first: consensus over minimal subsets (Fischler & Bolles 1981, but exhaustive), each worked out by
 * fitting the group, dropping what its own test contradicts and re-admitting what it does not. Blunders hide one another from a search that
 * removes the worst residual first; this one does not start from the contaminated fit.
 */
export function consensusGroups(observations: FitObservations): Consensus[] {
	const groups = new Map<string, number[]>();
	const note = (kept: number[]): void => {
		groups.set(kept.join(' '), kept);
	};
	note(Array.from({ length: observations.count }, (_, i) => i));
	const subsets = minimalSubsets(observations.count, leastPairs(observations.kind));
	const factor = observations.sigmaGiven ? 1 : robustVariance(observations, subsets);
	const limits = [1, 2, 3].map((degrees) => factor * chiSquareQuantile(1 - sidakLevel(observations.count), degrees));
	const isHopeless = contradiction(observations, limits[2]!);
	for (const subset of subsets) {
		if (isHopeless(subset)) continue;
		const fit = quickFit(pickPairs(observations, subset));
		if (!fit) continue;
		const kept: number[] = [];
		for (let i = 0; i < observations.count; i++) {
			if (subset.includes(i)) kept.push(i);
			else if (prediction(observations, fit, i) <= limits[degreesOf(observations.known[i]!) - 1]!) kept.push(i);
		}
		note(kept);
	}
	const largest = [...groups.values()]
		.sort((a, b) => b.length - a.length)
		.slice(0, observations.count > EXHAUSTIVE_PAIRS ? WORKED_OUT_OF_MANY : WORKED_OUT);
	const found = new Map<string, Consensus>();
	for (const group of largest) {
		const consensus = workOut(observations, group);
		if (consensus) found.set(consensus.kept.join(' '), consensus);
	}
	return [...found.values()].sort((a, b) => b.kept.length - a.kept.length);
}

/**
 * Which subsets need no fit: of a free fit with σ, three pairs whose mutual distances contradict each other, and three with which far fewer pairs
 * agree by distance than some three have in agreement. Distances are held against the worst σ of all pairs, so nothing that could be one of the
 * largest groups is passed over.
 */
function contradiction(observations: FitObservations, limit: number): (subset: readonly number[]) => boolean {
	const { kind, count, survey, control, surveyVariance, controlVariance, known, sigmaGiven, fixedScale } = observations;
	if (kind !== 'free' || !sigmaGiven || fixedScale !== 1 || count > EXHAUSTIVE_PAIRS || known.some((value) => value !== KNOWN_ALL)) {
		return () => false;
	}
	let variance = 0;
	for (let i = 0; i < count; i++) {
		const own =
			Math.max(...[0, 1, 2].map((k) => surveyVariance[3 * i + k]!)) + Math.max(...[0, 1, 2].map((k) => controlVariance[3 * i + k]!));
		variance = Math.max(variance, own);
	}
	const toleranceM = Math.sqrt(limit * variance);
	const agreement = distanceAgreement(survey, control, count, toleranceM);
	const least = largestAgreement(survey, control, count, toleranceM, agreement).size - SMALLER_GROUPS;
	return ([i, j, k]) =>
		!(agree(agreement, i!, j!) && agree(agreement, i!, k!) && agree(agreement, j!, k!)) || mostAround(agreement, i!, j!, k!) < least;
}

function degreesOf(known: number): number {
	return (known & KNOWN_PLAN ? 2 : 0) + (known & KNOWN_HEIGHT ? 1 : 0);
}

/** Drops the worst pair until the rest agree, then takes back all pairs that the rest do not contradict, until nothing changes. Null where too few are left. */
function workOut(observations: FitObservations, group: readonly number[]): Consensus | null {
	let consensus = dropWorst(observations, group);
	const barred = new Set<number>();
	for (let round = 0; consensus && round < 10; round++) {
		const { kept, trial } = consensus;
		const back = Array.from({ length: observations.count }, (_, i) => i).filter(
			(i) => !kept.includes(i) && !barred.has(i) && agrees(observations, trial, i),
		);
		if (back.length === 0) break;
		const wider = dropWorst(
			observations,
			[...kept, ...back].sort((x, y) => x - y),
		);
		for (const i of back) if (!wider?.kept.includes(i)) barred.add(i);
		if (!wider || wider.kept.length <= kept.length) break;
		consensus = wider;
	}
	return consensus;
}

function dropWorst(observations: FitObservations, group: readonly number[]): Consensus | null {
	let kept = [...group];
	let trial = tryFit(pickPairs(observations, kept));
	while (trial && !trial.passes) {
		const worst = kept[trial.worstPair];
		// No residual to blame: numbers beyond what can be tested.
		if (worst === undefined) return null;
		kept = kept.filter((i) => i !== worst);
		trial = tryFit(pickPairs(observations, kept));
	}
	return trial && { kept, trial };
}

/** A pair is held against the fit of the others: chi-square with σ, the ratio of variances with none. */
function agrees(observations: FitObservations, trial: FitTrial, i: number): boolean {
	const degrees = degreesOf(observations.known[i]!);
	const level = sidakLevel(observations.count);
	const distance = prediction(observations, trial.adjustment, i);
	if (observations.sigmaGiven) return distance <= chiSquareQuantile(1 - level, degrees);
	if (trial.redundancy < 1) return false;
	return varianceRatioTail(distance / degrees / Math.max(trial.objective / trial.redundancy, 1e-30), degrees, trial.redundancy) > level;
}

/** All subsets of `size` of `count`, or a seeded sample of distinct indices. */
function minimalSubsets(count: number, size: number): number[][] {
	const subsets: number[][] = [];
	if (count <= EXHAUSTIVE_PAIRS) {
		const grow = (subset: number[], from: number): void => {
			if (subset.length === size) subsets.push(subset);
			else for (let i = from; i < count; i++) grow([...subset, i], i + 1);
		};
		grow([], 0);
		return subsets;
	}
	const random = seededRandom(count);
	for (let k = 0; k < SAMPLES; k++) {
		const subset = new Set<number>();
		while (subset.size < size) subset.add(Math.floor(random() * count));
		subsets.push([...subset].sort((a, b) => a - b));
	}
	return subsets;
}

/** With no σ: the variance of unit weight from the subset whose fit leaves the smallest median misfit (least median of squares, Rousseeuw 1984). */
function robustVariance(observations: FitObservations, subsets: readonly number[][]): number {
	let least = Infinity;
	for (const subset of subsets) {
		const fit = quickFit(pickPairs(observations, subset));
		if (!fit) continue;
		const misfits: number[] = [];
		for (let i = 0; i < observations.count; i++) if (!subset.includes(i)) misfits.push(prediction(observations, fit, i));
		misfits.sort((a, b) => a - b);
		least = Math.min(least, misfits[Math.floor(misfits.length / 2)] ?? Infinity);
	}
	// The median of chi-square with 3 degrees is 2.366; the least of many medians is smaller than a fair one.
	return Number.isFinite(least) ? (2 * least) / 2.366 : 1;
}
