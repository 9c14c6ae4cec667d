import { twoSidedNormal } from '#shared/geometry/normal-distribution.ts';
import { popeTau } from '#shared/geometry/student-t.ts';
import type { Adjustment } from './adjust.ts';
import { type FitObservations, observationCount } from './fit-observations.ts';
import { fitUnknowns } from './least-pairs.ts';
import { fillPairFigures, newPairFigures, type PairFigures } from './pair-figures.ts';
import { quickFit } from './solve-fit.ts';

/** The level of all tests of one fit together: a clean set raises an alarm once in a thousand. */
export const FAMILY_LEVEL = 0.001;

/**
 * A fit under test: do its residuals contradict each other?
 * @param worst the largest normalised residual (with no σ: Pope's τ) over all axes that have redundancy
 * @param critical what it is held against: the family level shared out over the axes tested (Šidák 1967)
 */
export interface FitTrial {
	observations: FitObservations;
	adjustment: Adjustment;
	/** F = vᵀPv. */
	objective: number;
	redundancy: number;
	worst: number;
	worstPair: number;
	critical: number;
	passes: boolean;
}

/** The level of each of `tests` independent tests that together have FAMILY_LEVEL (Šidák 1967). */
export function sidakLevel(tests: number): number {
	return -Math.expm1(Math.log1p(-FAMILY_LEVEL) / Math.max(tests, 1));
}

/** Scratch: searches test by the thousand. */
let figures: PairFigures = newPairFigures(64);

/**
 * Tests an adjustment of these observations.
 * @param spent further unknowns that the observations have been freed of
 */
export function testFit(observations: FitObservations, adjustment: Adjustment, spent = 0): FitTrial {
	const redundancy = observationCount(observations) - fitUnknowns(observations.kind).length - spent;
	const objective = adjustment.equations.objective;
	if (figures.standardised.length < 3 * observations.count) figures = newPairFigures(2 * observations.count);
	fillPairFigures(observations, adjustment, figures);
	let worst = 0;
	let worstPair = -1;
	let tests = 0;
	for (let i = 0; i < observations.count; i++) {
		for (let k = 0; k < 3; k++) {
			const value = figures.standardised[3 * i + k]!;
			if (Number.isNaN(value)) continue;
			tests++;
			if (value > worst) {
				worst = value;
				worstPair = i;
			}
		}
	}
	if (!observations.sigmaGiven) worst = redundancy > 0 && objective > 0 ? worst / Math.sqrt(objective / redundancy) : 0;
	const critical = criticalValue(tests, observations.sigmaGiven ? null : redundancy);
	return { observations, adjustment, objective, redundancy, worst, worstPair, critical, passes: redundancy === 0 || worst <= critical };
}

/** Fits these observations from their closed form and tests the fit. Null where they do not determine it. */
export function tryFit(observations: FitObservations, spent = 0): FitTrial | null {
	const adjustment = quickFit(observations);
	return adjustment && testFit(observations, adjustment, spent);
}

const criticals = new Map<string, number>();

/** @param redundancy null with σ */
function criticalValue(tests: number, redundancy: number | null): number {
	const key = `${tests} ${redundancy}`;
	let value = criticals.get(key);
	if (value === undefined) {
		const level = sidakLevel(tests);
		value = redundancy === null ? twoSidedNormal(level) : popeTau(level, redundancy);
		criticals.set(key, value);
	}
	return value;
}

/**
 * How badly a fit goes with its observations, so that differences compare explanations: twice the loss of log likelihood.
 * With σ that is F; with none σ is estimated, so it is the number of observations times ln F.
 * @param base the fit asked for, whose redundancy is used throughout
 */
export function misfitScore(trial: FitTrial, base: FitTrial): number {
	if (trial.observations.sigmaGiven) return trial.objective;
	return base.redundancy * Math.log(Math.max(trial.objective, 1e-30) / Math.max(trial.redundancy, 1));
}
