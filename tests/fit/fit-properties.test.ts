import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { carryPoint, coverageFactor, fitCovarianceAt, fitCovarianceBetween } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import { type FitInput, type FitKind, type FitResult, fitKinds } from '#shared/fit/fit-schema.ts';
import { turnAfter } from '#shared/geometry/rotation.ts';
import { place, surveyScene, type Triple } from './survey-scene.ts';

function resultOf(input: FitInput): FitResult {
	const outcome = computeFit(input, { findings: false });
	if (!outcome.ok) throw new Error(`${outcome.refusal.code}: ${outcome.refusal.message}`);
	return outcome.result;
}

const kinds = fc.constantFrom<FitKind>(...fitKinds);
const seeds = fc.integer({ min: 1, max: 1e6 });

function expectSame(a: FitResult, b: FitResult, tolerance: number): void {
	a.pairs.forEach((pair, i) => {
		pair.residual.forEach((value, k) => {
			if (value !== null) expect(Math.abs(value - b.pairs[i]!.residual[k]!)).toBeLessThan(tolerance);
		});
		expect(pair.redundancy).toBeCloseTo(b.pairs[i]!.redundancy!, 6);
		if (pair.normalised !== null && a.redundancy > 1) expect(pair.normalised).toBeCloseTo(b.pairs[i]!.normalised!, 3);
	});
}

describe('properties of the fit', () => {
	it('does not care for the order of the pairs', () => {
		fc.assert(
			fc.property(kinds, seeds, fc.boolean(), (kind, seed, sigmas) => {
				const { input } = surveyScene(seed, kind, 6, { sigmas });
				const there = resultOf(input);
				const back = resultOf({ ...input, pairs: [...input.pairs].reverse() });
				expectSame(there, { ...back, pairs: [...back.pairs].reverse() }, 1e-8);
			}),
			{ numRuns: 60 },
		);
	});

	it('moves along when the survey frame is turned and shifted: residuals and reliability stay', () => {
		fc.assert(
			fc.property(
				kinds,
				seeds,
				fc.tuple(fc.double({ min: -3, max: 3, noNaN: true }), fc.double({ min: -3, max: 3, noNaN: true })),
				(kind, seed, [first, second]) => {
					// Equal σ on the survey axes: turned σ could not be given along the new axes.
					const { input } = surveyScene(seed, kind, 5);
					const pairs = input.pairs.map((pair) => ({ ...pair, surveySigma: [0.002, 0.002, 0.002] as Triple }));
					const turn = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
					const free = kind.startsWith('free');
					turnAfter(turn, free ? first : 0, free ? second : 0, kind === 'height' ? 0 : first + second);
					const moved = pairs.map((pair) => ({ ...pair, survey: place(turn, 1, pair.survey as Triple, [30, -40, 7]) }));
					expectSame(resultOf({ ...input, pairs }), resultOf({ ...input, pairs: moved }), 1e-8);
				},
			),
			{ numRuns: 60 },
		);
	});

	it('keeps the traces and the variance factor when the control frame is turned', () => {
		fc.assert(
			fc.property(seeds, fc.double({ min: -3, max: 3, noNaN: true }), (seed, angle) => {
				const { input } = surveyScene(seed, 'free', 6);
				const pairs = input.pairs.map((pair) => ({ ...pair, controlSigma: [0.0015, 0.0015, 0.0015] as Triple }));
				const turn = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
				turnAfter(turn, angle, 1, -angle);
				const a = resultOf({ ...input, pairs });
				const b = resultOf({
					...input,
					pairs: pairs.map((pair) => ({ ...pair, control: place(turn, 1, pair.control as Triple, [0, 0, 0]) })),
				});
				expect(b.varianceFactor! / a.varianceFactor!).toBeCloseTo(1, 5);
				a.pairs.forEach(({ redundancy }, i) => {
					expect(redundancy).toBeCloseTo(b.pairs[i]!.redundancy!, 6);
				});
			}),
			{ numRuns: 40 },
		);
	});

	it('takes a scale of the survey into the scale of a scaled fit', () => {
		fc.assert(
			fc.property(
				fc.constantFrom<FitKind>('levelled-scaled', 'free-scaled'),
				seeds,
				fc.double({ min: 0.001, max: 1000, noNaN: true }),
				(kind, seed, factor) => {
					const { input } = surveyScene(seed, kind, 5, { sigmas: false });
					const a = resultOf(input);
					const b = resultOf({
						...input,
						pairs: input.pairs.map((pair) => ({ ...pair, survey: pair.survey.map((value) => value! * factor) as Triple })),
					});
					expect((b.scale * factor) / a.scale).toBeCloseTo(1, 9);
					expectSame(a, b, 1e-7);
				},
			),
			{ numRuns: 40 },
		);
	});

	it('gives back an exact transformation', () => {
		fc.assert(
			fc.property(fc.constantFrom<FitKind>('levelled', 'levelled-scaled', 'free', 'free-scaled'), seeds, (kind, seed) => {
				const { input, trueSurvey, trueControl } = surveyScene(seed, kind, 5, { noise: 0 });
				const result = resultOf(input);
				expect(result.rms).toBeLessThan(2e-9);
				trueSurvey.forEach((point, i) => {
					carryPoint(result, point).forEach((value, k) => {
						expect(Math.abs(value - trueControl[i]![k]!)).toBeLessThan(1e-8);
					});
				});
			}),
			{ numRuns: 60 },
		);
	});

	it('spreads its redundancy over the pairs: the traces add up to f', () => {
		fc.assert(
			fc.property(kinds, seeds, fc.integer({ min: 3, max: 9 }), fc.boolean(), (kind, seed, count, sigmas) => {
				const result = resultOf(surveyScene(seed, kind, count, { sigmas }).input);
				expect(result.pairs.reduce((sum, pair) => sum + pair.redundancy!, 0)).toBeCloseTo(result.redundancy, 6);
			}),
			{ numRuns: 80 },
		);
	});

	it('is the same for weights that are all multiplied', () => {
		const { input } = surveyScene(3, 'free', 6, { sigmas: false });
		const weighted = (factor: number): FitResult =>
			resultOf({ ...input, pairs: input.pairs.map((pair, i) => ({ ...pair, weight: (i + 1) * factor })) });
		expectSame(weighted(1), weighted(1e6), 1e-9);
	});
});

describe('carried points', () => {
	it('have the covariance of one place between a place and itself, and a transposed one the other way round', () => {
		const result = resultOf(surveyScene(4, 'levelled-scaled', 5).input);
		const [p, q]: [Triple, Triple] = [
			[3, 4, 5],
			[-20, 7, 1],
		];
		expect(fitCovarianceBetween(result, p, p)).toEqual(fitCovarianceAt(result, p));
		const there = fitCovarianceBetween(result, p, q);
		const back = fitCovarianceBetween(result, q, p);
		for (let k = 0; k < 3; k++) for (let l = 0; l < 3; l++) expect(there[k]![l]).toBeCloseTo(back[l]![k]!, 15);
	});

	it('grow away from the targets', () => {
		const result = resultOf(surveyScene(4, 'levelled', 5).input);
		const near = fitCovarianceAt(result, result.origin);
		const far = fitCovarianceAt(result, [result.origin[0] + 300, result.origin[1], result.origin[2]]);
		expect(far[0]![0]! + far[1]![1]!).toBeGreaterThan(20 * (near[0]![0]! + near[1]![1]!));
	});

	it('use k = 2 with σ, Student with none, nothing where nothing is known', () => {
		expect(coverageFactor(resultOf(surveyScene(1, 'free', 4).input))).toBe(2);
		expect(coverageFactor(resultOf(surveyScene(1, 'levelled', 2, { sigmas: false }).input))).toBeCloseTo(4.5265, 3);
		const one = resultOf({ fit: 'height', pairs: [{ name: 'B1', survey: [null, null, 1.5], control: [null, null, 101.5] }] });
		expect(coverageFactor(one)).toBeNull();
		expect(one.varianceFactor).toBeNull();
		expect(one.pairs[0]!.normalised).toBeNull();
	});

	it('work from a result that was stored as JSON', () => {
		const result = resultOf(surveyScene(9, 'free', 5).input);
		expect(carryPoint(JSON.parse(JSON.stringify(result)) as FitResult, [1, 2, 3])).toEqual(carryPoint(result, [1, 2, 3]));
	});
});
