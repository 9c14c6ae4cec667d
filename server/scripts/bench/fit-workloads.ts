import { fitRigid, newRigidFit, type RigidFit } from '#shared/fit/rigid-fit.ts';
import { seededPairs } from './seeded-input.ts';
import type { Done, Program, Workload } from './workload.ts';
import { centroidSums } from './yardsticks.ts';

/** The closed-form fit, singular values and test of degeneracy included, against the sums alone. */

/** Sets of pairs one after another. */
interface Sets {
	sets: number;
	pairs: number;
	survey: Float64Array;
	control: Float64Array;
}

function makeSets(seed: number, sets: number, pairs: number): Sets {
	const survey = new Float64Array(3 * pairs * sets);
	const control = new Float64Array(3 * pairs * sets);
	for (let set = 0; set < sets; set++) {
		const made = seededPairs(seed + set, pairs);
		survey.set(made.survey, 3 * pairs * set);
		control.set(made.control, 3 * pairs * set);
	}
	return { sets, pairs, survey, control };
}

function fitAll({ sets, pairs, survey, control }: Sets, units: number): Done {
	const fit = newRigidFit();
	let refused = 0;
	let sum = 0;
	for (let unit = 0; unit < units; unit++) {
		const set = unit % sets;
		if (!fitRigid(survey, control, pairs * set, pairs, fit)) refused++;
		// The last fit of each set stands for all fits of it.
		if (unit >= units - sets)
			sum += (Math.floor(units / sets) + (set < units % sets ? 1 : 0)) * rmsOf(survey, control, pairs * set, pairs, fit);
	}
	return { n: units, check: () => (refused > 0 ? Number.NaN : sum / units) };
}

/** Root mean square length of the residuals, metres. */
function rmsOf(survey: Float64Array, control: Float64Array, from: number, count: number, fit: RigidFit): number {
	const { rotation, surveyMean, controlMean } = fit;
	let square = 0;
	for (let at = 3 * from; at < 3 * (from + count); at += 3) {
		const x = survey[at]! - surveyMean[0]!;
		const y = survey[at + 1]! - surveyMean[1]!;
		const z = survey[at + 2]! - surveyMean[2]!;
		for (let k = 0; k < 3; k++) {
			const off = control[at + k]! - controlMean[k]! - rotation[3 * k]! * x - rotation[3 * k + 1]! * y - rotation[3 * k + 2]! * z;
			square += off * off;
		}
	}
	return Math.sqrt(square / count);
}

function sumAll({ sets, pairs, survey, control }: Sets, units: number): Done {
	const sums = new Float64Array(9);
	let check = 0;
	for (let unit = 0; unit < units; unit++) {
		centroidSums(survey, control, pairs * (unit % sets), pairs, sums);
		check += sums[0]! + sums[4]! + sums[8]!;
	}
	return { n: units, check: () => check / units };
}

function fitting(name: string, sets: number, pairs: number, units: number, goal: number, value: number): Workload {
	const over =
		(run: (input: Sets, units: number) => Done) =>
		(times: number): Program => {
			const input = makeSets(1000, sets, pairs * times);
			return (count) => run(input, count);
		};
	return {
		name,
		unit: 'fits',
		units: { product: units, yardstick: units },
		goal,
		growth: 3,
		expected: { value, within: 5e-12 },
		product: over(fitAll),
		yardstick: over(sumAll),
	};
}

export const fitWorkloads: readonly Workload[] = [
	fitting('fit-6', 4096, 6, 1_000_000, 5, 0.00417196725),
	fitting('fit-1000', 64, 1000, 20_000, 1.5, 0.00519179444),
];
