import type { Vector3 } from '#shared/geometry/frame.ts';
import { twoSidedNormal } from '#shared/geometry/normal-distribution.ts';
import { studentTwoSided, varianceRatioTail } from '#shared/geometry/student-t.ts';
import { consensusGroups } from './consensus-search.ts';
import { type FitObservations, KNOWN_ALL, pickPairs } from './fit-observations.ts';
import { FAMILY_LEVEL, type FitTrial, misfitScore, sidakLevel, tryFit } from './fit-trial.ts';
import { predictedMisfit } from './prediction.ts';
import { type SystematicEffect, systematicEffects } from './systematic-effects.ts';

/** What makes one pair stand out. `axis`: 0 easting, 1 northing, 2 level; null for more than one. */
export interface Accusation {
	pair: number;
	axis: number | null;
	/** Where the fit of the others puts it, minus control: metres, control frame. */
	metres: [number, number, number];
}

/**
 * One story that makes the residuals of a fit agree.
 * @param score twice the loss of likelihood, and a charge for each parameter: the lowest tells the data best (Akaike 1974; the charge is 4, not 2)
 */
export interface Explanation {
	effects: SystematicEffect[];
	swapped: [number, number] | null;
	accused: Accusation[];
	trial: FitTrial;
	score: number;
}

const CHARGE = 4;
/** Scores nearer than this are as good: less than a thousand to one. */
export const AS_GOOD = 2 * Math.log(1000);
/** Exchanges are tried among all pairs to here. */
const SWAP_PAIRS = 40;
/** An axis with this variance, m², has no say in the fit. */
const FREED_VARIANCE = 1e8;
/** With no σ: an exchange must make vᵀPv this many times smaller. */
const SWAP_GAIN = 100;

/** Whether the residuals contradict each other, at the family level. With no σ a single pair is also held against the fit of the others. */
export function contradicts(base: FitTrial): boolean {
	if (!base.passes) return true;
	const { observations } = base;
	if (observations.sigmaGiven || base.redundancy < 4) return false;
	for (let i = 0; i < observations.count; i++) {
		const rest = tryFit(pickPairs(observations, everyIndexBut(observations, [i])));
		if (!rest || rest.redundancy < 1) continue;
		const spent = base.redundancy - rest.redundancy;
		const ratio = (base.objective - rest.objective) / spent / Math.max(rest.objective / rest.redundancy, 1e-30);
		if (varianceRatioTail(Math.max(ratio, 0), spent, rest.redundancy) < sidakLevel(observations.count)) return true;
	}
	return swaps(base).length > 0;
}

/** All stories under which the residuals agree, best first. */
export function explanations(base: FitTrial, station: Vector3 | undefined): Explanation[] {
	return [...effectStories(base, station), ...swaps(base), ...removals(base)].sort((a, b) => a.score - b.score);
}

/** Effects taken out one after another, while they are significant, until the rest agrees. */
function effectStories(base: FitTrial, station: Vector3 | undefined): Explanation[] {
	const stories: Explanation[] = [];
	for (const first of systematicEffects(base, station)) {
		const effects = [first];
		let trial = first.corrected;
		while (!trial.passes) {
			const next = systematicEffects(trial, station).find(({ code }) => !effects.some((taken) => taken.code === code));
			if (!next) break;
			effects.push(next);
			trial = next.corrected;
		}
		const parameters = effects.reduce((sum, { values }) => sum + values.length, 0);
		if (trial.passes) stories.push({ effects, swapped: null, accused: [], trial, score: misfitScore(trial, base) + CHARGE * parameters });
	}
	return stories;
}

/** Two labels exchanged, under which all pairs agree. */
function swaps(base: FitTrial): Explanation[] {
	const { observations } = base;
	const found: Explanation[] = [];
	if (observations.count > SWAP_PAIRS || observations.kind === 'height') return found;
	for (let a = 0; a < observations.count; a++) {
		for (let b = a + 1; b < observations.count; b++) {
			if (!couldBeExchanged(base, a, b)) continue;
			const trial = tryFit(exchangeControl(observations, a, b));
			if (!trial?.passes || trial.objective > base.objective / (observations.sigmaGiven ? 1 : SWAP_GAIN)) continue;
			found.push({ effects: [], swapped: [a, b], accused: [], trial, score: misfitScore(trial, base) + CHARGE });
		}
	}
	return found;
}

/** Labels exchanged over a distance leave residuals of that size: with far smaller ones the exchange need not be fitted. */
function couldBeExchanged({ observations, adjustment }: FitTrial, a: number, b: number): boolean {
	let apart = 0;
	for (let k = 0; k < 3; k++) apart += (observations.control[3 * a + k]! - observations.control[3 * b + k]!) ** 2;
	let square = 0;
	for (const value of adjustment.equations.residual) square += value * value;
	return square > 0.02 * apart;
}

/** Pairs left out, so that the largest group of the others agrees. */
function removals(base: FitTrial): Explanation[] {
	const { observations } = base;
	const stories = consensusGroups(observations)
		.filter(({ kept, trial }) => kept.length < observations.count && trial.redundancy > 0)
		.map(({ kept, trial }) => accuse(base, trial, everyIndexBut(observations, kept)));
	if (!observations.sigmaGiven) return stories;
	const fewest = Math.min(...stories.map(({ accused }) => accused.length));
	return stories.filter(({ accused }) => accused.length === fewest);
}

/** What is wrong with each pair that was left out: one axis, or all of it. */
function accuse(base: FitTrial, group: FitTrial, removed: readonly number[]): Explanation {
	const { observations } = base;
	const level = -Math.expm1(Math.log1p(-FAMILY_LEVEL) / (3 * removed.length));
	const unit = observations.sigmaGiven ? 1 : Math.sqrt(group.objective / group.redundancy);
	const critical = unit * (observations.sigmaGiven ? twoSidedNormal(level) : studentTwoSided(level, group.redundancy));
	const accused = removed.map((pair): Accusation => {
		const { metres, standardised } = predictedMisfit(observations, group.adjustment, pair);
		const failing = [0, 1, 2].filter((k) => (standardised[k] ?? 0) > critical);
		const axis = failing.length === 1 && observations.known[pair] === KNOWN_ALL ? failing[0]! : null;
		return { pair, axis, metres };
	});
	return { effects: [], swapped: null, accused, trial: group, score: scoreOfRemoval(base, accused, group) };
}

/** The score with only the accused axes freed, so that a story of one axis is charged for one. */
function scoreOfRemoval(base: FitTrial, accused: readonly Accusation[], group: FitTrial): number {
	const { observations } = base;
	const whole = accused.filter(({ axis }) => axis === null).map(({ pair }) => pair);
	const single = accused.length - whole.length;
	const freed = { ...observations, controlVariance: observations.controlVariance.slice() };
	for (const { pair, axis } of accused) if (axis !== null) freed.controlVariance[3 * pair + axis] = FREED_VARIANCE;
	const trial = single > 0 ? tryFit(pickPairs(freed, everyIndexBut(observations, whole)), single) : null;
	if (trial?.passes && trial.redundancy > 0) return misfitScore(trial, base) + CHARGE * (single + 3 * whole.length);
	return misfitScore(group, base) + 3 * CHARGE * accused.length;
}

/** The control coordinates of two pairs exchanged: what exchanged labels do. */
export function exchangeControl(observations: FitObservations, a: number, b: number): FitObservations {
	const order = Array.from({ length: observations.count }, (_, i) => (i === a ? b : i === b ? a : i));
	const other = pickPairs(observations, order);
	return { ...observations, control: other.control, controlVariance: other.controlVariance };
}

/** Indices 0 … count−1 without these. */
export function everyIndexBut(observations: FitObservations, without: readonly number[]): number[] {
	return Array.from({ length: observations.count }, (_, i) => i).filter((i) => !without.includes(i));
}
