import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { probabilityInBox, probabilityInDisc } from '#shared/check/plan-conformity.ts';
import { normalBetween, upperErrorFunction } from '#shared/geometry/error-function.ts';
import { isPlanCovariance, type PlanCovariance, principalAxes, sigmaAlong } from '#shared/geometry/plan-covariance.ts';
import { discCases } from './disc-probability-cases.ts';

describe('the normal distribution', () => {
	// 40-digit values of erfc.
	it.each([
		[0.1, 0.8875370839817152],
		[0.5, 0.4795001221869535],
		[0.999999, 0.1572996221581977],
		[1, 0.15729920705028513],
		[2, 0.004677734981047266],
		[3, 2.209049699858544e-5],
		[6.28, 6.610653977656802e-19],
		[6.29, 5.820751867247627e-19],
		[10, 2.088487583762545e-45],
		[26.5, 2.2109076642637343e-307],
	])('erfc(%d)', (x, want) => {
		expect(Math.abs(upperErrorFunction(x) / want - 1)).toBeLessThan(5e-15);
		expect(Math.abs(upperErrorFunction(-x) - (2 - want))).toBeLessThan(5e-16);
	});
	it('adds up', () => {
		fc.assert(
			fc.property(fc.double({ min: -9, max: 9, noNaN: true }), fc.double({ min: 0, max: 5, noNaN: true }), (from, width) => {
				expect(
					Math.abs(
						normalBetween(from, from + width) -
							(upperErrorFunction(-(from + width) / Math.SQRT2) - upperErrorFunction(-from / Math.SQRT2)) / 2,
					),
				).toBeLessThan(1e-15);
			}),
		);
	});
});

const covariance = fc
	.record({
		long: fc.double({ min: -3, max: 2, noNaN: true }),
		flat: fc.double({ min: -7, max: 0, noNaN: true }),
		turn: fc.double({ min: 0, max: 3.2, noNaN: true }),
	})
	.map(({ long, flat, turn }): PlanCovariance => {
		const a = 10 ** (2 * long);
		const b = a * 10 ** (2 * flat);
		const [c, s] = [Math.cos(turn), Math.sin(turn)];
		return [
			[a * c * c + b * s * s, (a - b) * c * s],
			[(a - b) * c * s, a * s * s + b * c * c],
		];
	});

/** P by sums over a fine polar grid: slow, coarse, and with nothing in common with the product's way. */
function discByGrid([me, mn]: readonly [number, number], [[a, b], [, c]]: PlanCovariance, radius: number): number {
	const det = a * c - b * b;
	let sum = 0;
	const [rings, spokes] = [700, 720];
	for (let i = 0; i < rings; i++) {
		const r = ((i + 0.5) * radius) / rings;
		for (let j = 0; j < spokes; j++) {
			const e = r * Math.cos((2 * Math.PI * j) / spokes) - me;
			const n = r * Math.sin((2 * Math.PI * j) / spokes) - mn;
			sum += r * Math.exp(-(c * e * e - 2 * b * e * n + a * n * n) / (2 * det));
		}
	}
	return (sum * (radius / rings) * ((2 * Math.PI) / spokes)) / (2 * Math.PI * Math.sqrt(det));
}

describe('probability in a disc', () => {
	it.each(discCases.map((c, index) => ({ ...c, index })))(
		'seeded case $index, r = $radius',
		({ offset, covariance: given, radius, conformity }) => {
			const got = probabilityInDisc(offset, given, radius);
			expect(Math.abs(got - conformity)).toBeLessThan(1e-10);
		},
	);
	it('agrees with a plain sum over the disc', () => {
		const cases: [[number, number], PlanCovariance, number][] = [
			[
				[3, -2],
				[
					[4, 1],
					[1, 6],
				],
				6,
			],
			[
				[0, 0],
				[
					[9, 0],
					[0, 9],
				],
				5,
			],
			[
				[-7, 4],
				[
					[2, -1.5],
					[-1.5, 3],
				],
				9,
			],
		];
		for (const [offset, given, radius] of cases)
			expect(probabilityInDisc(offset, given, radius)).toBeCloseTo(discByGrid(offset, given, radius), 5);
	});
	it('is the Rayleigh distribution for a round ellipse about the mark', () => {
		fc.assert(
			fc.property(fc.double({ min: 0.01, max: 50, noNaN: true }), fc.double({ min: 0.01, max: 50, noNaN: true }), (sigma, radius) => {
				const got = probabilityInDisc(
					[0, 0],
					[
						[sigma * sigma, 0],
						[0, sigma * sigma],
					],
					radius,
				);
				expect(Math.abs(got - -Math.expm1(-(radius * radius) / (2 * sigma * sigma)))).toBeLessThan(1e-12);
			}),
		);
	});
	it('takes a singular covariance along its line', () => {
		// Along (1, 2), through (1, 0): the chord of the circle of radius 5 is known in closed form.
		const got = probabilityInDisc(
			[1, 0],
			[
				[1, 2],
				[2, 4],
			],
			5,
		);
		const [along, across] = [1 / Math.sqrt(5), 2 / Math.sqrt(5)];
		const half = Math.sqrt(25 - across * across);
		expect(Math.abs(got - normalBetween((-half - along) / Math.sqrt(5), (half - along) / Math.sqrt(5)))).toBeLessThan(1e-14);
		expect(
			probabilityInDisc(
				[0, 6],
				[
					[4, 0],
					[0, 0],
				],
				5,
			),
		).toBe(0);
		expect(
			probabilityInDisc(
				[0, 5],
				[
					[0, 0],
					[0, 0],
				],
				5,
			),
		).toBe(1);
		expect(
			probabilityInDisc(
				[0, 5.001],
				[
					[0, 0],
					[0, 0],
				],
				5,
			),
		).toBe(0);
	});
	it('does not mind turning, mirroring or the unit', () => {
		fc.assert(
			fc.property(
				covariance,
				fc.double({ min: -20, max: 20, noNaN: true }),
				fc.double({ min: -20, max: 20, noNaN: true }),
				fc.double({ min: 0, max: 25, noNaN: true }),
				(given, e, n, radius) => {
					const got = probabilityInDisc([e, n], given, radius);
					const [[a, b], [, c]] = given;
					expect(
						probabilityInDisc(
							[-n, e],
							[
								[c, -b],
								[-b, a],
							],
							radius,
						),
					).toBeCloseTo(got, 9);
					expect(
						probabilityInDisc(
							[-e, n],
							[
								[a, -b],
								[-b, c],
							],
							radius,
						),
					).toBeCloseTo(got, 9);
					const k = 2 ** -40;
					expect(
						probabilityInDisc(
							[e * k, n * k],
							[
								[a * k * k, b * k * k],
								[b * k * k, c * k * k],
							],
							radius * k,
						),
					).toBeCloseTo(got, 12);
					expect(got).toBeGreaterThanOrEqual(0);
					expect(got).toBeLessThanOrEqual(1);
				},
			),
		);
	});
	it('answers for hostile sizes', () => {
		for (const size of [1e-290, 1e-30, 1, 1e30, 1e290]) {
			for (const radius of [0, 1e-150, 1, 1e150]) {
				for (const offset of [0, 1e-150, 1, 1e150]) {
					const got = probabilityInDisc(
						[offset, offset / 3],
						[
							[size, 0.5 * size],
							[0.5 * size, size],
						],
						radius,
					);
					expect(got >= 0 && got <= 1).toBe(true);
				}
			}
		}
	});
});

describe('probability in a box', () => {
	it('is the product along the axes where they are independent', () => {
		const got = probabilityInBox(
			[2, -3],
			[
				[4, 0],
				[0, 9],
			],
			{ lower: -5, upper: 6, yawRad: 0 },
		);
		expect(Math.abs(got - normalBetween(-3.5, 2) * normalBetween(-2 / 3, 3))).toBeLessThan(1e-12);
	});
	it('agrees with a plain sum', () => {
		const [me, mn] = [1, 2];
		const [a, b, c] = [4, 1.5, 2];
		const yawRad = 0.4;
		const steps = 600;
		let sum = 0;
		for (let i = 0; i < steps; i++) {
			for (let j = 0; j < steps; j++) {
				const [p, q] = [-3 + (7 * (i + 0.5)) / steps, -3 + (7 * (j + 0.5)) / steps];
				const e = p * Math.cos(yawRad) - q * Math.sin(yawRad) - me;
				const n = p * Math.sin(yawRad) + q * Math.cos(yawRad) - mn;
				sum += Math.exp(-(c * e * e - 2 * b * e * n + a * n * n) / (2 * (a * c - b * b)));
			}
		}
		const want = (sum * (7 / steps) ** 2) / (2 * Math.PI * Math.sqrt(a * c - b * b));
		expect(
			probabilityInBox(
				[me, mn],
				[
					[a, b],
					[b, c],
				],
				{ lower: -3, upper: 4, yawRad },
			),
		).toBeCloseTo(want, 5);
	});
	it('holds more than the disc inside it and less than the disc about it', () => {
		fc.assert(
			fc.property(
				covariance,
				fc.double({ min: -10, max: 10, noNaN: true }),
				fc.double({ min: -10, max: 10, noNaN: true }),
				fc.double({ min: 0.5, max: 12, noNaN: true }),
				(given, e, n, half) => {
					const got = probabilityInBox([e, n], given, { lower: -half, upper: half, yawRad: 0.7 });
					expect(got).toBeGreaterThanOrEqual(probabilityInDisc([e, n], given, half) - 1e-9);
					expect(got).toBeLessThanOrEqual(probabilityInDisc([e, n], given, half * Math.SQRT2) + 1e-9);
				},
			),
		);
	});
});

describe('error ellipses', () => {
	it('has the long axis where the spread is greatest', () => {
		fc.assert(
			fc.property(covariance, (given) => {
				const axes = principalAxes(given);
				for (let k = 0; k < 36; k++) {
					const sigma = sigmaAlong(given, [Math.cos((k * Math.PI) / 18), Math.sin((k * Math.PI) / 18)]);
					expect(sigma).toBeLessThanOrEqual(axes.longSigma * (1 + 1e-9));
					expect(sigma).toBeGreaterThanOrEqual(axes.shortSigma * (1 - 1e-6) - 1e-8 * axes.longSigma);
				}
				expect(Math.abs(sigmaAlong(given, axes.long) / axes.longSigma - 1)).toBeLessThan(1e-9);
			}),
		);
	});
	it('knows what is no covariance', () => {
		expect(
			isPlanCovariance([
				[1, 2],
				[2, 4],
			]),
		).toBe(true);
		expect(
			isPlanCovariance([
				[0.1, 0.2],
				[0.2, 0.4],
			]),
		).toBe(true);
		expect(
			isPlanCovariance([
				[1, 2],
				[2, 1],
			]),
		).toBe(false);
		expect(
			isPlanCovariance([
				[1, 0.5],
				[0.4, 1],
			]),
		).toBe(false);
		expect(
			isPlanCovariance([
				[-1, 0],
				[0, 1],
			]),
		).toBe(false);
	});
});
