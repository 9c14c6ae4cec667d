import { chiSquareQuantile } from '#shared/geometry/chi-square.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { varianceRatioTail } from '#shared/geometry/student-t.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN, pickPairs } from './fit-observations.ts';
import { type FitTrial, sidakLevel, tryFit } from './fit-trial.ts';
import { leastPairs } from './least-pairs.ts';
import { prediction } from './prediction.ts';
import { quickFit } from './solve-fit.ts';

/** All minimal subsets are tried to here, a seeded sample beyond. */
const EXHAUSTIVE_PAIRS = 40;
const SAMPLES = 2000;
/** So many of the largest groups are worked out in full. */
const WORKED_OUT = 24;

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
	for (const subset of subsets) {
		const fit = quickFit(pickPairs(observations, subset));
		if (!fit) continue;
		const kept: number[] = [];
		for (let i = 0; i < observations.count; i++) {
			if (subset.includes(i)) kept.push(i);
			else if (prediction(observations, fit, i) <= limits[degreesOf(observations.known[i]!) - 1]!) kept.push(i);
		}
		note(kept);
	}
	const largest = [...groups.values()].sort((a, b) => b.length - a.length).slice(0, WORKED_OUT);
	const found = new Map<string, Consensus>();
	for (const group of largest) {
		const consensus = workOut(observations, group);
		if (consensus) found.set(consensus.kept.join(' '), consensus);
	}
	return [...found.values()].sort((a, b) => b.kept.length - a.kept.length);
}

function degreesOf(known: number): number {
	return (known & KNOWN_PLAN ? 2 : 0) + (known & KNOWN_HEIGHT ? 1 : 0);
}

/** Drops the worst pair until the rest agree, then takes back every pair that the rest do not contradict. Null where too few are left. */
function workOut(observations: FitObservations, group: readonly number[]): Consensus | null {
	let kept = [...group];
	let trial = tryFit(pickPairs(observations, kept));
	while (trial && !trial.passes) {
		const worst = kept[trial.worstPair]!;
		kept = kept.filter((i) => i !== worst);
		trial = tryFit(pickPairs(observations, kept));
	}
	if (!trial) return null;
	for (;;) {
		let best: Consensus | null = null;
		for (let i = 0; i < observations.count; i++) {
			if (kept.includes(i)) continue;
			const wider = [...kept, i].sort((a, b) => a - b);
			const widened = tryFit(pickPairs(observations, wider));
			if (!widened || !agrees(observations, trial, widened, i)) continue;
			if (!best || widened.worst / widened.critical < best.trial.worst / best.trial.critical) best = { kept: wider, trial: widened };
		}
		if (!best) return { kept, trial };
		({ kept, trial } = best);
	}
}

/** With σ the widened fit's own test decides; with none a small set has τ near its bound whatever it holds, so the pair is held against the fit of the others. */
function agrees(observations: FitObservations, trial: FitTrial, widened: FitTrial, i: number): boolean {
	if (observations.sigmaGiven) return widened.passes;
	if (trial.redundancy < 1) return false;
	const degrees = degreesOf(observations.known[i]!);
	const ratio = prediction(observations, trial.adjustment, i) / degrees / Math.max(trial.objective / trial.redundancy, 1e-30);
	return varianceRatioTail(ratio, degrees, trial.redundancy) > sidakLevel(observations.count);
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
