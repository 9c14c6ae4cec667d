import { beforeAll, describe, expect, it } from 'vitest';
import { simulatedSheet, simulateSurvey } from '#server/scripts/simulate-survey.ts';
import { countMiss, noMisses, spreadOf } from '#server/scripts/weigh-misses.ts';
import type { CheckInput, CheckOutput } from '#shared/check/check-input.ts';
import { runCheck } from '#shared/check/run-check.ts';
import type { ModelReading } from '#shared/model/model-schema.ts';
import { readFileHere } from '../model/read-model-file.ts';

/**
 * The closed loop on one of our own models: displaced by known amounts, observed in turned and shifted frames with known noise, and checked.
 * server/scripts/closed-loop.ts does the same for any folder of models.
 */

let reading: ModelReading;
beforeAll(async () => {
	reading = await readFileHere('fixtures/ifc/made-frame-mm-ifc4x3.ifc');
}, 60_000);

const seeds = [1, 2, 3, 4, 5, 6, 7, 8];

function checked(seed: number, change: (input: CheckInput) => CheckInput = (input) => input) {
	const { displaced, setups, points } = simulateSurvey(reading.checkpoints, seed);
	const output: CheckOutput = runCheck(
		change({
			elements: reading.elements.map((element) => ({ ...element, id: String(element.entityNumber) })),
			checkpoints: reading.checkpoints.map((checkpoint) => ({ ...checkpoint, elementId: String(checkpoint.entityNumber) })),
			setups,
			points,
			sheet: simulatedSheet,
			stage: 'as-cast',
		}),
	);
	return { displaced, output };
}

function counted(change?: (input: CheckInput) => CheckInput) {
	const count = noMisses();
	for (const seed of seeds) {
		const { displaced, output } = checked(seed, change);
		for (const [index, deviation] of output.deviations.entries()) countMiss(count, deviation, displaced[index]!);
	}
	return count;
}

describe('the closed loop', { timeout: 60_000 }, () => {
	it('gives back what was displaced, with a U that is neither too large nor too small, and the verdicts that were planted', () => {
		const count = counted();
		expect(count.checkpoints).toBe(seeds.length * reading.checkpoints.length);
		expect(count.notMeasured).toBe(0);
		expect(Math.abs(spreadOf(count) - 1)).toBeLessThan(0.05);
		expect(count.largest).toBeLessThan(5);
		expect(count.wrongVerdicts).toBe(0);
		// On the limit itself the truth lies within U of it with a probability of 95.45 %.
		expect(Math.abs(count.tooClose / count.onLimit - 0.9545)).toBeLessThan(0.02);
	});

	it('gives the difference of two faces with the covariance between them', () => {
		let [sum, count] = [0, 0];
		for (const seed of seeds) {
			const { displaced, output } = checked(seed);
			const known = new Map(reading.checkpoints.map(({ id }, index) => [id, displaced[index]!.deviationMm]));
			for (const { characteristic, deviationMm, uncertaintyMm, from } of output.derived) {
				if (characteristic !== 'section') continue;
				count++;
				sum += ((deviationMm - from.reduce((total, id) => total + known.get(id)!, 0)) / (uncertaintyMm! / 2)) ** 2;
			}
		}
		expect(count).toBeGreaterThan(500);
		expect(Math.abs(Math.sqrt(sum / count) - 1)).toBeLessThan(0.06);
	});

	it('would show a U that forgets what a set-up’s points share', () => {
		const count = counted((input) => ({ ...input, setups: input.setups.map((setup) => ({ ...setup, commonMm: 0 })) }));
		expect(spreadOf(count)).toBeGreaterThan(1.05);
	});
});
