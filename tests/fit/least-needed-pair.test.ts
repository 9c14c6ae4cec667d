import { describe, expect, it } from 'vitest';
import { fitCovarianceAt } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput, FitKind } from '#shared/fit/fit-schema.ts';
import { leastNeededPair } from '#shared/fit/least-needed-pair.ts';
import { surveyScene } from './survey-scene.ts';

const anyone = (): boolean => true;

/** The same by fitting anew without each pair. */
function bruteForce(input: FitInput, surveyPlaces: readonly (readonly [number, number, number])[]): { name: string; afterM: number } {
	const costs = input.pairs.map(({ name }) => {
		const outcome = computeFit(
			{ ...input, pairs: input.pairs.map((pair) => ({ ...pair, heldBack: pair.name === name })) },
			{ findings: false },
		);
		if (!outcome.ok) return { name, afterM: Infinity };
		const traces = surveyPlaces.map((place) => {
			const covariance = fitCovarianceAt(outcome.result, place);
			return covariance[0][0] + covariance[1][1] + covariance[2][2];
		});
		return { name, afterM: 2 * Math.sqrt(Math.max(...traces)) };
	});
	return costs.sort((a, b) => a.afterM - b.afterM)[0]!;
}

describe.each<FitKind>(['levelled', 'free', 'free-scaled'])('the pair that a %s fit needs least', (fit) => {
	it('is the one whose leaving costs least where the fit is used, as by fitting without each', () => {
		for (let seed = 1; seed <= 8; seed++) {
			const { input, trueSurvey, trueControl } = surveyScene(seed, fit, 5 + (seed % 4));
			const used = trueSurvey.slice(0, 2);
			const found = leastNeededPair(input, trueControl.slice(0, 2), anyone)!;
			const expected = bruteForce(input, used);
			expect(found.afterM / expected.afterM).toBeCloseTo(1, 2);
			expect(found.afterM).toBeGreaterThan(found.beforeM);
			const other = leastNeededPair(input, trueControl.slice(0, 2), (name) => name !== found.name)!;
			expect(other.afterM).toBeGreaterThanOrEqual(found.afterM);
			expect(other.name).not.toBe(found.name);
		}
	});

	it('is none where the others would not do', () => {
		const least = fit === 'levelled' ? 2 : 3;
		const { input, trueControl } = surveyScene(3, fit, least + 1);
		expect(leastNeededPair(input, trueControl, anyone)).toBeNull();
		expect(leastNeededPair(surveyScene(3, fit, least + 2).input, [], anyone)).toBeNull();
	});
});

describe('the pair that a fit needs least', () => {
	it('is known with no σ too, and is of those in the fit', () => {
		const { input, trueControl } = surveyScene(4, 'levelled', 6, { sigmas: false });
		const pairs = input.pairs.map((pair, i) => ({ ...pair, heldBack: i === 2 }));
		const found = leastNeededPair({ ...input, pairs }, trueControl, anyone)!;
		expect(found.name).not.toBe('T3');
		expect(Number.isFinite(found.afterM)).toBe(true);
	});
});
