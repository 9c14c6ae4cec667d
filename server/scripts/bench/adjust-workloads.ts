import { type Adjustment, type AdjustSpace, newAdjustSpace } from '#shared/fit/adjust.ts';
import { type FitObservations, observationsOf, pickPairs } from '#shared/fit/fit-observations.ts';
import type { FitInput } from '#shared/fit/fit-schema.ts';
import { fillLeaveOneOut, misfitOf } from '#shared/fit/leave-one-out.ts';
import { fillPairFigures, newPairFigures, type PairFigures } from '#shared/fit/pair-figures.ts';
import { fitRigid, newRigidFit } from '#shared/fit/rigid-fit.ts';
import { solveFit } from '#shared/fit/solve-fit.ts';
import { type SeededPairs, seededPairs } from './seeded-input.ts';
import type { Program, Workload } from './workload.ts';

/** The adjustment of seven unknowns with its reliability, and every pair left out. */

const SETS = 64;
const PAIRS = 50;
/** The sets are gone through in turn, from the first again after so many: the mean is that of these. */
const ROUND = 5000;

/** σ control 2, 2, 3 mm; σ survey q, q, 2q with q = 1 … 4 mm in turn. */
function observed({ count, survey, control }: SeededPairs): FitObservations {
	const pairs = Array.from({ length: count }, (_, i): FitInput['pairs'][number] => {
		const q = (1 + (i % 4)) / 1000;
		return {
			name: String(i),
			survey: [survey[3 * i]!, survey[3 * i + 1]!, survey[3 * i + 2]!],
			control: [control[3 * i]!, control[3 * i + 1]!, control[3 * i + 2]!],
			surveySigma: [q, q, 2 * q],
			controlSigma: [0.002, 0.002, 0.003],
		};
	});
	return observationsOf({ fit: 'free-scaled', pairs }, pairs);
}

function observedSets(times: number): FitObservations[] {
	return Array.from({ length: SETS }, (_, set) => observed(seededPairs(5000 + set, PAIRS * times)));
}

/** What `adjust-50` does for one set: the minimum, Q, redundancies and normalised residuals. */
function adjustOne(observations: FitObservations, space: AdjustSpace, figures: PairFigures): Adjustment {
	const solution = solveFit(observations, space);
	if (!solution.ok) throw new Error(solution.refusal.message);
	fillPairFigures(observations, solution.adjustment, figures);
	return solution.adjustment;
}

function adjusting(times: number): Program {
	const sets = observedSets(times);
	const pairs = PAIRS * times;
	return (units) => {
		const space = newAdjustSpace(pairs);
		const figures = newPairFigures(pairs);
		let sum = 0;
		for (let unit = 0; unit < units; unit++) {
			adjustOne(sets[(unit % ROUND) % SETS]!, space, figures);
			for (let at = 0; at < 3 * pairs; at++) sum += figures.standardised[at]! * figures.redundancy[at]!;
		}
		return { n: units, check: () => sum / units };
	};
}

function fittingOnce(times: number): Program {
	const sets = Array.from({ length: SETS }, (_, set) => seededPairs(5000 + set, PAIRS * times));
	return (units) => {
		const fit = newRigidFit();
		let sum = 0;
		for (let unit = 0; unit < units; unit++) {
			const { survey, control, count } = sets[unit % SETS]!;
			fitRigid(survey, control, 0, count, fit);
			sum += fit.singular[0]!;
		}
		return { n: units, check: () => sum / units };
	};
}

function leavingOut(times: number): Program {
	const pairs = PAIRS * times;
	const sets = observedSets(times).map((observations) => {
		const figures = newPairFigures(pairs);
		return {
			observations,
			adjustment: adjustOne(observations, newAdjustSpace(pairs), figures),
			figures,
			misfits: new Float64Array(3 * pairs),
		};
	});
	return (units) => {
		for (let unit = 0; unit < units; unit++) {
			const { observations, adjustment, figures, misfits } = sets[unit % SETS]!;
			fillLeaveOneOut(observations, adjustment, figures, misfits);
		}
		return {
			n: units,
			check: () => Math.max(...sets.slice(0, units).map(({ observations, misfits }) => offRefits(observations, misfits))),
		};
	};
}

/** The largest difference from a full new fit of all others, over all pairs, metres. */
function offRefits(observations: FitObservations, misfits: Float64Array): number {
	let largest = 0;
	const all = Array.from({ length: observations.count }, (_, i) => i);
	for (const i of all) {
		const solution = solveFit(
			pickPairs(
				observations,
				all.filter((other) => other !== i),
			),
		);
		const misfit = solution.ok ? misfitOf(observations, solution.adjustment.pose, i) : [];
		for (let k = 0; k < 3; k++) largest = Math.max(largest, Math.abs((misfit[k] ?? Number.NaN) - misfits[3 * i + k]!));
	}
	return largest;
}

export const adjustWorkloads: readonly Workload[] = [
	{
		name: 'adjust-50',
		unit: 'adjustments',
		units: { product: 10 * ROUND, yardstick: 1_000_000 },
		goal: 18,
		growth: 3,
		expected: { value: 91.452986, within: 2e-6 },
		product: adjusting,
		yardstick: fittingOnce,
	},
	{
		name: 'leave-one-out-50',
		unit: 'sets of pairs',
		units: { product: 200_000, yardstick: 10 * ROUND },
		goal: 0.3,
		growth: 3,
		expected: { value: 0, within: 1e-6 },
		product: leavingOut,
		yardstick: adjusting,
	},
];
