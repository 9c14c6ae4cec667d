import { describe, expect, it } from 'vitest';
import type { CheckInput } from '#shared/check/check-input.ts';
import { deviationSchema } from '#shared/check/check-schema.ts';
import { fitCovarianceField } from '#shared/check/fit-covariance-field.ts';
import { CheckCancelled, runCheck } from '#shared/check/run-check.ts';
import { fitCovarianceAt, fitCovarianceBetween } from '#shared/fit/carry-point.ts';
import {
	aCheck,
	aCheckpoint,
	anElement,
	aPoint,
	aSetup,
	aSheet,
	at,
	exactFit,
	fitOf,
	gaussian,
	pairsOf,
	seeded,
	targetPlaces,
	toSurvey,
	withSigma,
} from './measured-world.ts';

const first = (over: Partial<CheckInput>) => {
	const output = runCheck(aCheck(over));
	for (const deviation of output.deviations) deviationSchema.parse(deviation);
	return { ...output, deviation: output.deviations[0]! };
};

describe('deviations at map coordinates', () => {
	it.each([16, -4.25, 0, 299])('finds a face %d mm off', (mm) => {
		const { deviation } = first({ points: [aPoint(at(0.2 + mm / 1000, 0.11, 1.43))] });
		expect(deviation.deviationMm).toBeCloseTo(mm, 5);
		expect(deviation.measured![0]).toBeCloseTo(at(0.2 + mm / 1000, 0, 0)[0], 7);
	});
	it('takes the offset off along the outward normal', () => {
		const { deviation } = first({ points: [aPoint(at(0.2 + 0.018 + 0.003, 0, 1.5), { offsetMm: 18 })] });
		expect(deviation.deviationMm).toBeCloseTo(3, 5);
		const turned = aCheckpoint({ direction: [Math.SQRT1_2, -Math.SQRT1_2, 0] });
		const out = 0.025 * Math.SQRT1_2;
		expect(
			first({ checkpoints: [turned], points: [aPoint(at(0.2 + out, -out, 1.5), { offsetMm: 20 })] }).deviation.deviationMm,
		).toBeCloseTo(5, 5);
	});
	it('reads a level against the sloping design surface at the measured place', () => {
		const [e, n] = at(0, 0, 0);
		const [a, b] = [0.02, -0.01];
		const surface: [number, number, number] = [a, b, at(0, 0, 4)[2] - a * e - b * n];
		const checkpoint = aCheckpoint({ characteristic: 'level', direction: null, place: at(0, 0, 4), surface, mark: 'S1' });
		const point = aPoint(at(0.2, 0.1, 4 + 0.02 * 0.2 - 0.01 * 0.1 - 0.007), { name: 'S1' });
		expect(first({ checkpoints: [checkpoint], points: [point] }).deviation.deviationMm).toBeCloseTo(-7, 4);
	});
	it('is + when high on a soffit too, and takes the offset off downwards', () => {
		const checkpoint = aCheckpoint({ characteristic: 'level', direction: null, place: at(0, 0, 4), isSoffit: true, mark: 'S1' });
		// The ball of 15 mm is held under the soffit, which sits 6 mm high: its centre is 9 mm under the design.
		expect(
			first({ checkpoints: [checkpoint], points: [aPoint(at(0, 0, 4.006 - 0.015), { name: 'S1', offsetMm: 15 })] }).deviation.deviationMm,
		).toBeCloseTo(6, 5);
	});
	it('gives distance and direction in plan', () => {
		const checkpoint = aCheckpoint({ characteristic: 'plan', direction: null, place: at(3, 4, 0), mark: 'AB-1' });
		const { deviation } = first({ checkpoints: [checkpoint], points: [aPoint(at(3.005, 3.998, 0.02), { name: 'AB-1' })] });
		expect(deviation.offsetMm![0]).toBeCloseTo(5, 5);
		expect(deviation.offsetMm![1]).toBeCloseTo(-2, 5);
		expect(deviation.deviationMm).toBeCloseTo(Math.hypot(5, 2), 5);
		expect(deviation.limitsMm).toEqual([null, 15]);
		expect(deviation.verdict).toBe('within');
	});
	it('says how far beyond the limit, only where outside', () => {
		const { deviation, summary } = first({ points: [aPoint(at(0.216, 0, 1.5))] });
		expect(deviation.verdict).toBe('outside');
		expect(deviation.beyondMm).toBeCloseTo(6, 5);
		expect(summary).toEqual({ within: 0, outside: 1, 'too-close-to-call': 0, undecided: 0, 'not-measured': 0, 'no-tolerance': 0 });
		expect(first({ points: [aPoint(at(0.208, 0, 1.5))] }).deviation).toMatchObject({ verdict: 'too-close-to-call', beyondMm: null });
	});
	it('judges a box along the grid', () => {
		const sheet = aSheet({ rules: [{ id: 'box', match: {}, lowerMm: -8, upperMm: 8, shape: 'box', axes: 'grid' }] });
		const checkpoint = aCheckpoint({ characteristic: 'plan', direction: null, place: at(3, 4, 0), mark: 'AB-1' });
		const along = (gridYawRad: number | null) =>
			first({
				sheet,
				gridYawRad,
				checkpoints: [checkpoint],
				setups: [aSetup({ commonMm: 0 })],
				points: [aPoint(at(3.009, 4.009, 0), { name: 'AB-1' })],
			});
		expect(along(Math.PI / 4).deviation).toMatchObject({ boxYawRad: Math.PI / 4, limitsMm: [-8, 8], verdict: 'outside' });
		expect(along(Math.PI / 4).deviation.beyondMm).toBeCloseTo(9 * Math.SQRT2 - 8, 4);
		expect(along(null).deviation.verdict).toBe('too-close-to-call');
		expect(along(null).findings.map(({ code }) => code)).toContain('no-grid');
	});
});

describe('what is not measured', () => {
	const reason = (over: Partial<CheckInput>) => {
		const { deviation } = first(over);
		expect(deviation).toMatchObject({
			verdict: 'not-measured',
			deviationMm: null,
			measured: null,
			expandedUncertaintyMm: null,
			conformity: null,
			pointCount: 0,
		});
		return deviation.notMeasuredReason;
	};
	it('is null with a reason, its limits still shown', () => {
		expect(reason({})).toBe('no points in this survey');
		expect(reason({ points: [aPoint(at(9, 9, 9), { name: 'x' })] })).toBe('no survey point of its name or within reach');
		expect(reason({ points: [aPoint(at(0.6, 0, 1.5))] })).toBe('C3-G-E: measured 0.40 m off the face, further than the reach of 0.30 m');
		expect(reason({ points: [aPoint(at(0.2, 0.5, 1.5))] })).toBe(
			'C3-G-E: measured 0.50 m beside it along the face, further than the reach of 0.30 m',
		);
		expect(first({}).deviation).toMatchObject({ limitsMm: [-10, 10], ruleId: 'faces' });
	});
	it('leaves voided points and points without a fit out', () => {
		expect(reason({ points: [aPoint(at(0.2, 0, 1.5), { voided: true })] })).toContain('no survey point');
		expect(reason({ points: [aPoint(at(0.2, 0, 1.5), { setupId: 'other' })] })).toContain('no survey point');
		expect(reason({ points: [aPoint([Number.NaN, 0, 0])] })).toContain('no survey point');
	});
	it('has a verdict of its own without a rule or a size', () => {
		const points = [aPoint(at(0.2, 0, 1.5))];
		expect(first({ points, sheet: aSheet({ rules: [] }) }).deviation).toMatchObject({
			verdict: 'no-tolerance',
			limitsMm: null,
			ruleId: null,
		});
		const needs = first({
			points,
			sheet: aSheet({ rules: [{ id: 'r', match: {}, lowerMm: null, upperMm: { greaterOf: [5, { lengthOver: 100 }] } }] }),
		});
		expect(needs.deviation).toMatchObject({ verdict: 'no-tolerance', limitsMm: null, ruleId: 'r' });
		expect(needs.findings.map(({ code }) => code)).toContain('limit-needs-size');
	});
});

describe('uncertainty', () => {
	it('is that of fit, point and common part along the direction', () => {
		const checkpoint = aCheckpoint({ direction: [0.6, 0.8, 0], place: at(40, -30, 6) });
		const setup = aSetup({ commonMm: 1.5, pointSigmaM: [0.003, 0.001, 0.002] });
		const point = aPoint(at(40, -30, 6));
		const { deviation } = first({ checkpoints: [checkpoint], setups: [setup], points: [point] });
		const c = fitCovarianceAt(setup.fit, point.surveyPoint);
		const fit = Math.sqrt(0.36 * c[0][0] + 0.96 * c[0][1] + 0.64 * c[1][1]) * 1000;
		// The direction in the survey frame: turned back by the yaw of 0.7.
		const [x, y] = [Math.cos(0.7) * 0.6 + Math.sin(0.7) * 0.8, Math.cos(0.7) * 0.8 - Math.sin(0.7) * 0.6];
		const shot = Math.sqrt((3 * x) ** 2 + (1 * y) ** 2);
		expect(deviation.standardUncertaintyPartsMm!.fit).toBeCloseTo(fit, 6);
		expect(deviation.standardUncertaintyPartsMm!.point).toBeCloseTo(shot, 6);
		expect(deviation.expandedUncertaintyMm).toBeCloseTo(2 * Math.hypot(fit, shot, 1.5), 6);
	});
	it('is what many surveys of the same place scatter by', () => {
		const u = seeded(41);
		const place = at(45, 38, 6);
		const checkpoint = aCheckpoint({ characteristic: 'plan', direction: null, place, mark: 'P' });
		const level = aCheckpoint({ id: 'c2', characteristic: 'level', direction: null, place, mark: 'P' });
		const noise = (sigma: readonly number[]): [number, number, number] => [
			sigma[0]! * gaussian(u),
			sigma[1]! * gaussian(u),
			sigma[2]! * gaussian(u),
		];
		const runs = 800;
		const sums = [0, 0, 0, 0];
		let last = first({ checkpoints: [checkpoint, level], points: [aPoint(place, { name: 'P' })], setups: [aSetup({ commonMm: 0 })] });
		for (let run = 0; run < runs; run++) {
			const fit = fitOf({
				fit: 'levelled',
				pairs: pairsOf(targetPlaces, withSigma, () => ({ survey: noise(withSigma.surveySigma!), control: noise(withSigma.controlSigma!) })),
			});
			const error = noise([0.001, 0.001, 0.001]);
			const shot = toSurvey(place).map((value, axis) => value + error[axis]!) as [number, number, number];
			last = first({
				checkpoints: [checkpoint, level],
				points: [aPoint(place, { name: 'P', surveyPoint: shot })],
				setups: [aSetup({ fit: { ...fit, chiSquare: null, sigmaGiven: true }, commonMm: 0 })],
			});
			const [e, n] = last.deviations[0]!.offsetMm!;
			const h = last.deviations[1]!.deviationMm!;
			sums[0]! += e * e;
			sums[1]! += e * n;
			sums[2]! += n * n;
			sums[3]! += h * h;
		}
		const [[ee, en], [, nn]] = last.deviation.covarianceMm2!;
		const uh = last.deviations[1]!.expandedUncertaintyMm! / 2;
		// The standard deviation of a variance from 800 runs is 5 % of it; fifteen in a hundred are three of them.
		expect(Math.abs(sums[0]! / runs / ee - 1)).toBeLessThan(0.15);
		expect(Math.abs(sums[2]! / runs / nn - 1)).toBeLessThan(0.15);
		expect(Math.abs(sums[3]! / runs / (uh * uh) - 1)).toBeLessThan(0.15);
		expect(Math.abs(sums[1]! / runs - en) / Math.sqrt(ee * nn)).toBeLessThan(0.15);
	}, 60_000);
	it('shrinks with repeats only in the part that is the point’s own', () => {
		const points = [0.004, 0.002, 0.003].map((off) => aPoint(at(0.2 + off, 0, 1.5)));
		const { deviation } = first({ points });
		expect(deviation.deviationMm).toBeCloseTo(3, 5);
		expect(deviation.pointCount).toBe(3);
		expect(deviation.spreadMm).toBeCloseTo(2, 5);
		expect(deviation.standardUncertaintyPartsMm).toMatchObject({ point: expect.closeTo(1 / Math.sqrt(3), 6), common: 2 });
	});
	it('is unknown, and the verdict undecided, without σ where nothing stands for it', () => {
		const { deviation, findings } = first({ points: [aPoint(at(0.2, 0, 1.5))], setups: [aSetup({ pointSigmaM: null })] });
		expect(deviation).toMatchObject({ verdict: 'undecided', expandedUncertaintyMm: null, conformity: null });
		expect(findings.map(({ code }) => code)).toContain('uncertainty-unknown');
		const bare = fitOf({ fit: 'free', pairs: pairsOf(targetPlaces.slice(0, 3)) });
		expect(bare.redundancy).toBe(3);
	});
	it('takes Student’s factor and the scatter of the fit where no σ is given', () => {
		const u = seeded(3);
		const fit = fitOf({
			fit: 'levelled',
			pairs: pairsOf(targetPlaces, {}, () => ({
				survey: [0.002 * gaussian(u), 0.002 * gaussian(u), 0.002 * gaussian(u)],
				control: [0, 0, 0],
			})),
		});
		const { deviation } = first({ points: [aPoint(at(0.2, 0, 1.5))], setups: [aSetup({ fit, pointSigmaM: null, commonMm: 0 })] });
		const parts = deviation.standardUncertaintyPartsMm!;
		expect(parts.point).toBeCloseTo(1000 * Math.sqrt(fit.varianceFactor!), 9);
		// t at 95.45 % two-sided for 11 degrees of freedom: 2.255 (tables).
		expect(fit.redundancy).toBe(11);
		expect(deviation.expandedUncertaintyMm! / Math.hypot(parts.fit!, parts.point!)).toBeCloseTo(2.255, 2);
	});
	it('counts a fit that scatters more than its σ with that scatter', () => {
		const u = seeded(8);
		const fit = fitOf({
			fit: 'levelled',
			pairs: pairsOf(targetPlaces, withSigma, () => ({
				survey: [0.02 * gaussian(u), 0.02 * gaussian(u), 0.02 * gaussian(u)],
				control: [0, 0, 0],
			})),
		});
		const { deviation, findings } = first({ points: [aPoint(at(0.2, 0, 1.5))], setups: [aSetup({ fit })] });
		expect(findings.map(({ code }) => code)).toContain('fit-test-failed');
		const c = fitCovarianceAt(fit, toSurvey(at(0.2, 0, 1.5)));
		expect(deviation.standardUncertaintyPartsMm!.fit).toBeCloseTo(1000 * Math.sqrt(c[0][0] * fit.varianceFactor!), 6);
	});
});

describe('the covariance field of a fit', () => {
	it('equals J·Q·Jᵀ between any two places', () => {
		const u = seeded(12);
		for (const fit of [
			exactFit(),
			fitOf({ fit: 'free-scaled', pairs: pairsOf(targetPlaces, withSigma) }),
			fitOf({ fit: 'height', pairs: pairsOf(targetPlaces, withSigma) }),
		]) {
			const field = fitCovarianceField(fit);
			for (let k = 0; k < 20; k++) {
				const [p, q] = [0, 1].map(() => toSurvey(at(200 * (u() - 0.5), 200 * (u() - 0.5), 30 * u()))) as [
					ReturnType<typeof toSurvey>,
					ReturnType<typeof toSurvey>,
				];
				const want = fitCovarianceAt(fit, p);
				const size = want[0][0] + want[1][1] + want[2][2];
				for (let i = 0; i < 3; i++)
					for (let j = 0; j < 3; j++) expect(Math.abs(field.at(p)[i]![j]! - want[i]![j]!) / size).toBeLessThan(1e-11);
				const [wp, wq] = [
					[u(), u(), u()],
					[u(), u(), u()],
				] as [[number, number, number], [number, number, number]];
				const terms = [
					[p, wp],
					[q, wq],
				] as const;
				let direct = 0;
				for (const [a, wa] of terms) {
					for (const [b, wb] of terms) {
						const c = fitCovarianceBetween(fit, a, b);
						for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) direct += wa[i]! * c[i]![j]! * wb[j]!;
					}
				}
				expect(
					Math.abs(
						field.varianceOfSum([
							{ surveyPoint: p, weight: wp },
							{ surveyPoint: q, weight: wq },
						]) /
							direct -
							1,
					),
				).toBeLessThan(1e-9);
			}
		}
	});
});

describe('progress', () => {
	it('is told, and cancelling stops the work', () => {
		const checkpoints = Array.from({ length: 1000 }, (_, k) => aCheckpoint({ id: `c${k}`, mark: `M${k}`, place: at(k, 0, 0) }));
		const told: number[][] = [];
		runCheck(aCheck({ checkpoints }), { onProgress: (done, of) => told.push([done, of]) });
		expect(told.at(-1)).toEqual([1000, 1000]);
		expect(told.length).toBeGreaterThan(3);
		expect(() => runCheck(aCheck({ checkpoints }), { isCancelled: () => true })).toThrow(CheckCancelled);
	});
	it('is quick: 5 000 checkpoints, 20 000 points', () => {
		const u = seeded(77);
		const elements = Array.from({ length: 1000 }, (_, k) => anElement({ id: `e${k}`, mark: `E${k}` }));
		const checkpoints = Array.from({ length: 5000 }, (_, k) =>
			aCheckpoint({
				id: `c${k}`,
				elementId: `e${k % 1000}`,
				mark: `M${k}`,
				characteristic: k % 2 === 0 ? 'face' : 'plan',
				place: at(60 * u(), 40 * u(), 12 * u()),
			}),
		);
		const points = Array.from({ length: 20_000 }, (_, k) =>
			aPoint(at(60 * u(), 40 * u(), 12 * u()), { name: k < 2500 ? `m${2 * k}` : `${k}` }),
		);
		const { deviations, unmatchedPoints } = runCheck(aCheck({ elements, checkpoints, points }));
		expect(deviations.filter(({ deviationMm }) => deviationMm !== null).length).toBeGreaterThan(100);
		expect(unmatchedPoints.length).toBeGreaterThan(1000);
	});
});
