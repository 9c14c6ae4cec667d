import { chiSquareQuantile, chiSquareTail } from '#shared/geometry/chi-square.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { consensusGroups } from './consensus-search.ts';
import { observationsOf } from './fit-observations.ts';
import type { FitInput, FitKind, FitRefusal } from './fit-schema.ts';
import { FAMILY_LEVEL, testFit } from './fit-trial.ts';
import { predictedMisfit } from './prediction.ts';
import { solveFit } from './solve-fit.ts';

/** A mark with its coordinates and standard deviations at two times, metres, each in the frame of its time. */
export interface TwiceMeasured {
	name: string;
	before: Vector3;
	after: Vector3;
	beforeSigma: Vector3;
	afterSigma: Vector3;
}

/**
 * @param congruent all marks kept their mutual positions, at the family level of 0.1 %
 * @param marks movement: after less before, in the frame of before, on the fit of the stable marks; `stable` null where no group of marks says which moved
 */
export interface EpochComparison {
	statistic: number;
	degrees: number;
	critical: number;
	significance: number;
	congruent: boolean;
	marks: { name: string; stable: boolean | null; movement: [number, number, number] | null; standardised: number | null }[];
}

/**
 * Did the control move between two surveys? The global congruency test (Pelzer 1971, Deutsche Geodätische Kommission C 164; Niemeier 2008, ch. 15):
 * after the best fit of one epoch to the other, which takes the datum out, vᵀPv is chi-square where nothing moved. Where it fails, the largest
 * group of marks that agree is taken as stable, and the movements of the others are given on its fit; with no single largest group nobody is named.
 * @param kind `levelled` where both epochs are plumb, else `free`; `height` for level runs
 */
export function compareEpochs(
	kind: Extract<FitKind, 'height' | 'levelled' | 'free'>,
	marks: readonly TwiceMeasured[],
): { ok: true; comparison: EpochComparison } | { ok: false; refusal: FitRefusal } {
	const pairs: FitInput['pairs'] = marks.map(({ name, before, after, beforeSigma, afterSigma }) => ({
		name,
		survey: [...after],
		control: [...before],
		surveySigma: [...afterSigma],
		controlSigma: [...beforeSigma],
	}));
	const observations = observationsOf({ fit: kind, pairs }, pairs);
	const solution = solveFit(observations);
	if (!solution.ok) return solution;
	const trial = testFit(observations, solution.adjustment);
	if (trial.redundancy < 1)
		return {
			ok: false,
			refusal: { code: 'too-few-pairs', message: 'With the least marks alone no movement shows: compare at least one more.' },
		};
	const significance = chiSquareTail(trial.objective, trial.redundancy);
	const congruent = significance >= FAMILY_LEVEL && trial.passes;
	const groups = congruent ? [] : consensusGroups(observations).filter(({ kept }) => kept.length < marks.length);
	const largest = groups.filter(({ kept }) => kept.length === groups[0]!.kept.length);
	const stable = largest.length === 1 && largest[0]!.kept.length * 2 > marks.length ? largest[0]! : null;
	const fit = congruent ? solution.adjustment : (stable?.trial.adjustment ?? null);
	const comparison: EpochComparison = {
		statistic: trial.objective,
		degrees: trial.redundancy,
		critical: chiSquareQuantile(1 - FAMILY_LEVEL, trial.redundancy),
		significance,
		congruent,
		marks: marks.map(({ name }, i) => {
			const isStable = congruent || (stable ? stable.kept.includes(i) : null);
			if (!fit || isStable === null) return { name, stable: null, movement: null, standardised: null };
			const { metres, standardised } = predictedMisfit(observations, fit, i);
			return {
				name,
				stable: isStable,
				movement: metres,
				standardised: isStable ? null : Math.max(...standardised.map((value) => value ?? 0)),
			};
		}),
	};
	return { ok: true, comparison };
}
