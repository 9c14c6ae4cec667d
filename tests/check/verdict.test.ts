import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { runJudge } from '#server/cli/judge.ts';
import type { Judgement } from '#shared/check/judge-schema.ts';
import { judge, planConformityLeast } from '#shared/check/verdict.ts';
import { verdictCases } from './verdict-cases.ts';

describe('judge against figures computed elsewhere', () => {
	it.each(verdictCases)('$name: $why', ({ input, expect: want, tolerance }) => {
		const { exitCode, output } = runJudge(JSON.stringify(input));
		expect(exitCode).toBe(0);
		const got = output as { verdict: string; conformity: number };
		expect(got.verdict).toBe(want.verdict);
		expect(Math.abs(got.conformity - want.conformity)).toBeLessThanOrEqual(tolerance);
	});

	// JCGM 106:2012, one-sided table of 7.4 and the diode of 7.3, recomputed to all digits.
	it.each([
		[0.8, 0.8416212335729143],
		[0.9, 1.2815515655446004],
		[0.95, 1.6448536269514722],
		[0.99, 2.3263478740408408],
		[0.999, 3.090232306167813],
	])('a value %d of conformity lies %d u inside one limit', (probability, z) => {
		const { conformity } = judge({ deviationMm: 10 - z * 3, standardUncertaintyMm: 3, limitsMm: [null, 10], decision: 'simple' });
		expect(Math.abs(conformity! - probability)).toBeLessThan(1e-14);
	});
	it('agrees with the diode example', () => {
		const { conformity } = judge({ deviationMm: -5.47, standardUncertaintyMm: 0.05, limitsMm: [null, -5.4], decision: 'simple' });
		expect(Math.abs(conformity! - 0.9192433407662289)).toBeLessThan(1e-12);
	});
});

describe('closed limits', () => {
	const guarded = (deviationMm: number, standardUncertaintyMm: number, upperMm: number) =>
		judge({ deviationMm, standardUncertaintyMm, limitsMm: [null, upperMm], decision: 'guarded' }).verdict;
	it('counts a sum that meets the limit in decimals as meeting it, though doubles round it beyond', () => {
		expect(0.1 + 2 * 0.1).toBeGreaterThan(0.3);
		expect(guarded(0.1, 0.1, 0.3)).toBe('within');
		expect(0.8 - 2 * 0.05).toBeGreaterThan(0.7);
		expect(guarded(0.8, 0.05, 0.7)).toBe('too-close-to-call');
	});
	it('lets nothing else through', () => {
		expect(guarded(10.000001, 2.5, 15)).toBe('too-close-to-call');
		expect(guarded(20.000001, 2.5, 15)).toBe('outside');
		expect(guarded(1e16, 1, 1e16)).toBe('too-close-to-call');
		expect(guarded(15, 0, 15)).toBe('within');
		expect(guarded(15.000000000000002, 0, 15)).toBe('outside');
	});
	it('takes a point on the circle as inside it', () => {
		for (const [e, n, r] of [
			[3, 4, 5],
			[0.3, 0.4, 0.5],
			[5, 12, 13],
			[0.7, 2.4, 2.5],
			[-12, 16, 20],
		] as const) {
			expect(
				judge({
					characteristic: 'plan',
					offsetMm: [e, n],
					covarianceMm2: [
						[0, 0],
						[0, 0],
					],
					radiusMm: r,
					decision: 'guarded',
				}),
			).toEqual({
				verdict: 'within',
				conformity: 1,
			});
		}
	});
});

describe('properties', () => {
	const mm = fc.double({ min: -60, max: 60, noNaN: true });
	const u = fc.double({ min: 0, max: 20, noNaN: true });
	const line = fc
		.record({ deviationMm: mm, standardUncertaintyMm: u, a: mm, b: mm })
		.map(({ deviationMm, standardUncertaintyMm, a, b }) => ({
			deviationMm,
			standardUncertaintyMm,
			limitsMm: [Math.min(a, b), Math.max(a, b)] as [number, number],
		}));

	it('follows the words of the rule', () => {
		fc.assert(
			fc.property(line, ({ deviationMm: d, standardUncertaintyMm, limitsMm }) => {
				const U = 2 * standardUncertaintyMm;
				const { verdict } = judge({ deviationMm: d, standardUncertaintyMm, limitsMm, decision: 'guarded' });
				if (d + U < limitsMm[1] - 1e-9 && d - U > limitsMm[0] + 1e-9) expect(verdict).toBe('within');
				else if (d - U > limitsMm[1] + 1e-9 || d + U < limitsMm[0] - 1e-9) expect(verdict).toBe('outside');
				else if (Math.min(...[d + U, d - U].flatMap((x) => limitsMm.map((l) => Math.abs(x - l)))) > 1e-9)
					expect(verdict).toBe('too-close-to-call');
			}),
		);
	});
	it('never says within below Φ(2) − Φ(−2) nor outside above Φ(−2)', () => {
		fc.assert(
			fc.property(line, (input) => {
				const { verdict, conformity } = judge({ ...input, decision: 'guarded' });
				if (verdict === 'within') expect(conformity).toBeGreaterThanOrEqual(2 * planConformityLeast - 1 - 1e-9);
				if (verdict === 'outside') expect(conformity).toBeLessThanOrEqual(1 - planConformityLeast + 1e-9);
			}),
		);
	});
	it('changes sides with the sign', () => {
		fc.assert(
			fc.property(
				line,
				fc.constantFrom('guarded' as const, 'simple' as const),
				({ deviationMm, standardUncertaintyMm, limitsMm: [lower, upper] }, decision) => {
					const one = judge({ deviationMm, standardUncertaintyMm, limitsMm: [lower, upper], decision });
					const other = judge({ deviationMm: -deviationMm, standardUncertaintyMm, limitsMm: [-upper, -lower], decision });
					expect(other.verdict).toBe(one.verdict);
					expect(Math.abs(other.conformity! - one.conformity!)).toBeLessThan(1e-15);
				},
			),
		);
	});
	it('is undecided without u only where u counts', () => {
		const base = { deviationMm: 3, standardUncertaintyMm: null, limitsMm: [-5, 5] as [number, number] };
		expect(judge({ ...base, decision: 'guarded' })).toEqual({ verdict: 'undecided', conformity: null });
		expect(judge({ ...base, decision: 'simple' })).toEqual({ verdict: 'within', conformity: null });
		const plan = { characteristic: 'plan' as const, offsetMm: [3, 4] as [number, number], covarianceMm2: null, radiusMm: 4.9 };
		expect(judge({ ...plan, decision: 'guarded' })).toEqual({ verdict: 'undecided', conformity: null });
		expect(judge({ ...plan, decision: 'simple' })).toEqual({ verdict: 'outside', conformity: null });
	});
});

describe('a box in plan', () => {
	const box = (over: Partial<Extract<Judgement, { boxYawRad: number }>>) =>
		judge({
			characteristic: 'plan',
			offsetMm: [4, 0],
			covarianceMm2: [
				[1, 0],
				[0, 1],
			],
			limitsMm: [-10, 10],
			boxYawRad: 0,
			decision: 'guarded',
			...over,
		});
	it('is judged along each axis', () => {
		expect(box({}).verdict).toBe('within');
		expect(box({ offsetMm: [8.5, 0] }).verdict).toBe('too-close-to-call');
		expect(box({ offsetMm: [0, -13] }).verdict).toBe('outside');
		expect(box({ offsetMm: [7, 7], boxYawRad: Math.PI / 4 }).verdict).toBe('too-close-to-call');
		expect(box({ offsetMm: [9, 9], boxYawRad: Math.PI / 4 }).verdict).toBe('outside');
		expect(box({ covarianceMm2: null }).verdict).toBe('undecided');
	});
});

describe('the command', () => {
	const refused = (text: string) => {
		const { exitCode, output } = runJudge(text);
		return [exitCode, (output as { error: { code: string } }).error.code];
	};
	it.each([
		'',
		'{',
		'[]',
		'3',
		'{}',
		'{"deviationMm":1,"standardUncertaintyMm":-1,"limitsMm":[1,2],"decision":"simple"}',
		'{"deviationMm":1,"standardUncertaintyMm":1,"limitsMm":[2,1],"decision":"simple"}',
		'{"deviationMm":1,"standardUncertaintyMm":1,"limitsMm":[1,2],"decision":"lenient"}',
		'{"characteristic":"plan","offsetMm":[1,2],"covarianceMm2":[[1,2],[2,1]],"radiusMm":1,"decision":"guarded"}',
		'{"characteristic":"plan","offsetMm":[1,2],"covarianceMm2":[[1,0],[0,1]],"radiusMm":-1,"decision":"guarded"}',
	])('refuses %s', (text) => {
		expect(refused(text)).toEqual([2, 'bad-input']);
	});
	it.each([
		'{"deviationMm":NaN,"standardUncertaintyMm":1,"limitsMm":[1,2],"decision":"simple"}',
		'{"deviationMm":1e999,"standardUncertaintyMm":1,"limitsMm":[1,2],"decision":"simple"}',
		'{"deviationMm":"Infinity","standardUncertaintyMm":1,"limitsMm":[1,2],"decision":"simple"}',
		'{"characteristic":"plan","offsetMm":[1,2],"covarianceMm2":[[1,0],[0,-1e999]],"radiusMm":1,"decision":"guarded"}',
	])('names what is not finite: %s', (text) => {
		expect(refused(text)).toEqual([2, 'not-finite']);
	});
});
