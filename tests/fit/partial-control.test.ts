import { describe, expect, it } from 'vitest';
import { carryPoint, fitCovarianceAt } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput, FitResult } from '#shared/fit/fit-schema.ts';
import { readFitInput } from '#shared/fit/read-fit-input.ts';
import { surveyScene } from './survey-scene.ts';

function resultOf(value: unknown): FitResult {
	const read = readFitInput(value);
	if (!read.ok) throw new Error(read.refusal.message);
	const outcome = computeFit(read.input);
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	return outcome.result;
}

/** Marks without a level, and benchmarks without a plan position. */
function partial(seed: number): { all: FitInput; some: FitInput } {
	const { input } = surveyScene(seed, 'levelled', 7);
	const pairs = input.pairs.map((pair, i): FitInput['pairs'][number] => {
		const [e, n, h] = pair.control;
		return { ...pair, control: i % 3 === 1 ? [e, n, null] : i % 3 === 2 ? [null, null, h] : [e, n, h] };
	});
	return { all: input, some: { ...input, pairs } };
}

describe('control of which plan or level alone is known', () => {
	it('takes plan from the marks and level from the benchmarks', () => {
		const { some } = partial(3);
		const result = resultOf(some);
		// 5 pairs with plan, 5 with level: 15 observations, 4 unknowns.
		expect(result.redundancy).toBe(11);
		expect(result.pairs.reduce((sum, pair) => sum + pair.redundancy!, 0)).toBeCloseTo(11, 8);
		expect(result.pairs[1]!.residual[2]).toBeNull();
		expect(result.pairs[2]!.residual.slice(0, 2)).toEqual([null, null]);
		expect(result.pairs[2]!.leaveOneOut!.slice(0, 2)).toEqual([null, null]);
	});

	it('is what a fit with a hopeless σ in place of the unknown coordinate gives', () => {
		const { all, some } = partial(5);
		const loose: FitInput = {
			...all,
			pairs: all.pairs.map((pair, i) => ({
				...pair,
				controlSigma: pair.controlSigma!.map((sigma, k) => (some.pairs[i]!.control[k] === null ? 1e4 : sigma)) as [number, number, number],
			})),
		};
		const [a, b] = [resultOf(some), resultOf(loose)];
		carryPoint(a, [4, 5, 6]).forEach((value, k) => {
			expect(value).toBeCloseTo(carryPoint(b, [4, 5, 6])[k]!, 7);
		});
		fitCovarianceAt(a, [4, 5, 6]).forEach((row, k) => {
			row.forEach((value, l) => {
				expect(Math.abs(value - fitCovarianceAt(b, [4, 5, 6])[k]![l]!)).toBeLessThan(1e-9);
			});
		});
	});

	it('checks a held-back benchmark in height alone', () => {
		const { some } = partial(7);
		some.pairs[2]!.heldBack = true;
		const held = resultOf(some).pairs[2]!;
		expect(held.residual.slice(0, 2)).toEqual([null, null]);
		expect(held.sigma!.slice(0, 2)).toEqual([null, null]);
		expect(held.normalised).toBeCloseTo(Math.abs(held.residual[2]!) / held.sigma![2]!, 12);
	});

	it('refuses where no level, or too few plan positions, are left, and null where a free fit needs a number', () => {
		const { all } = partial(1);
		const levels = { ...all, pairs: all.pairs.map((pair) => ({ ...pair, control: [null, null, pair.control[2]] })) };
		const plans = { ...all, pairs: all.pairs.map((pair) => ({ ...pair, control: [pair.control[0], pair.control[1], null] })) };
		for (const value of [levels, plans]) {
			const read = readFitInput(value);
			const outcome = read.ok ? computeFit(read.input) : read;
			expect(!outcome.ok && outcome.refusal.code).toBe('too-few-pairs');
		}
		const half = readFitInput({ ...all, pairs: all.pairs.map((pair) => ({ ...pair, control: [pair.control[0], null, 3] })) });
		expect(!half.ok && half.refusal.code).toBe('bad-input');
		expect(readFitInput({ ...plans, fit: 'free' }).ok).toBe(false);
	});

	it('fits a level run by heights alone', () => {
		const result = resultOf({
			fit: 'height',
			pairs: [
				{ name: 'B1', survey: [null, null, 1.204], control: [null, null, 101.2] },
				{ name: 'B2', survey: [null, null, 0.896], control: [null, null, 100.9] },
			],
		});
		expect(result.translation[2]).toBeCloseTo(100, 9);
		expect(result.redundancy).toBe(1);
		expect(result.pairs.map(({ residual }) => residual[2]!.toFixed(4))).toEqual(['0.0040', '-0.0040']);
	});

	it('multiplies plan only by a known scale on a levelled fit', () => {
		const { input } = surveyScene(8, 'levelled', 5, { noise: 0 });
		const k = 0.9996;
		const scaled = {
			...input,
			knownScale: k,
			pairs: input.pairs.map((pair) => ({ ...pair, control: [pair.control[0]! * k, pair.control[1]! * k, pair.control[2]!] })),
		};
		const result = resultOf(scaled);
		expect(result.scale).toBe(k);
		expect(result.rms).toBeLessThan(1e-8);
		expect(result.findings).toEqual([]);
	});
});
