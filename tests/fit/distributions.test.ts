import { describe, expect, it } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput } from '#shared/fit/fit-schema.ts';
import { DELTA_0, NORMAL_CRITICAL } from '#shared/fit/pair-reliability.ts';
import { chiSquareCdf, chiSquareQuantile, chiSquareTail } from '#shared/geometry/chi-square.ts';
import { normalCdf, normalQuantile } from '#shared/geometry/normal-distribution.ts';
import { popeTau, studentTwoSided, studentTwoSidedTail, varianceRatioTail } from '#shared/geometry/student-t.ts';
import figures from './published-figures.json' with { type: 'json' };

describe('distributions', () => {
	it('has the critical values of Baarda and Pope', () => {
		expect(NORMAL_CRITICAL).toBeCloseTo(figures.reliability.critical, 12);
		expect(DELTA_0).toBeCloseTo(figures.reliability.delta0, 10);
		// The figures' own error grows to 1e-9 where the tail is flat (τ of f = 60 at 5 % is 1.95270981679, by quadrature).
		for (const { f, alpha, tau } of figures.reliability.tau) expect(popeTau(alpha, f)).toBeCloseTo(tau, 8);
		expect(popeTau(0.05, 60)).toBeCloseTo(1.9527098167947, 11);
	});

	it('inverts itself', () => {
		for (const p of [1e-12, 1e-5, 0.025, 0.3, 0.5, 0.8, 0.999, 1 - 1e-9]) expect(normalCdf(normalQuantile(p)) / p).toBeCloseTo(1, 12);
		for (const degrees of [1, 2, 3, 7, 40, 300]) {
			for (const p of [0.0005, 0.025, 0.5, 0.975, 0.99999]) expect(chiSquareCdf(chiSquareQuantile(p, degrees), degrees)).toBeCloseTo(p, 11);
			for (const p of [1e-6, 0.001, 0.0455, 0.5]) expect(studentTwoSidedTail(studentTwoSided(p, degrees), degrees) / p).toBeCloseTo(1, 9);
		}
	});

	it('keeps its closed forms: chi-square of 2 degrees, Student of 1 and 2, F of 2 upper degrees', () => {
		for (const x of [0.1, 1, 5, 30, 90]) {
			expect(chiSquareTail(x, 2) / Math.exp(-x / 2)).toBeCloseTo(1, 12);
			expect(studentTwoSidedTail(x, 1)).toBeCloseTo(1 - (2 / Math.PI) * Math.atan(x), 12);
			expect(studentTwoSidedTail(x, 2)).toBeCloseTo(1 - x / Math.sqrt(2 + x * x), 12);
			expect(varianceRatioTail(x, 2, 9) / (1 + (2 * x) / 9) ** -4.5).toBeCloseTo(1, 11);
		}
	});

	it('has the target registration error of Fitzpatrick, West and Maurer as the trace of a carried covariance', () => {
		for (const { input, tre2 } of figures.targetRegistrationError.examples) {
			const outcome = computeFit(input as unknown as FitInput, { findings: false });
			if (!outcome.ok) throw new Error(outcome.refusal.message);
			const covariance = outcome.result.carried[0]!.covariance!;
			expect((covariance[0][0] + covariance[1][1] + covariance[2][2]) / tre2).toBeCloseTo(1, 5);
		}
	});
});
