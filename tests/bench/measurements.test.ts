// @vitest-environment node
import { describe, expect, it } from 'vitest';
import { adjustWorkloads } from '#server/scripts/bench/adjust-workloads.ts';
import { csvWorkloads } from '#server/scripts/bench/csv-workloads.ts';
import { fitWorkloads } from '#server/scripts/bench/fit-workloads.ts';
import { searchWorkloads } from '#server/scripts/bench/search-workloads.ts';
import { nearlyNormal, seededPairs, seededTriples } from '#server/scripts/bench/seeded-input.ts';
import { countWithin } from '#server/scripts/bench/yardsticks.ts';
import { bestTurn } from '#shared/fit/best-turn.ts';
import { largestAgreement } from '#shared/fit/largest-agreement.ts';
import { fitRigid, newRigidFit } from '#shared/fit/rigid-fit.ts';
import { triadPose } from '#shared/fit/triad.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { bestRotation } from '#shared/geometry/singular-values.ts';

/** Enough units that every set is gone through; means of whole rounds are those of the full measurement only where the round is whole. */
const reduced: Record<string, { units: number; value: number; within: number }> = {
	// The mean of the 4 096 sets once each.
	'fit-6': { units: 4096, value: 0.00417196725, within: 2e-6 },
	'fit-1000': { units: 64, value: 0.00519179444, within: 2e-7 },
	'adjust-50': { units: 64, value: 91.452986, within: 0.2 },
	'leave-one-out-50': { units: 3, value: 0, within: 1e-6 },
	'match-12-40': { units: 1, value: 9, within: 0 },
	'blunder-40': { units: 1, value: 32, within: 0 },
	'blunder-200': { units: 1, value: 160, within: 0 },
	csv: { units: 200_000, value: 1164830031278.22, within: 0.02 },
	'csv-duplicates': { units: 200_000, value: 1164830031278.22, within: 0.02 },
};

describe('what is measured', () => {
	it.each([...fitWorkloads, ...adjustWorkloads, ...searchWorkloads, ...csvWorkloads])('$name does its work', ({ name, product }) => {
		const { units, value, within } = reduced[name]!;
		const done = product(1)(units);
		expect(done.n).toBe(units);
		expect(Math.abs(done.check() - value)).toBeLessThanOrEqual(within);
	});

	it('has the mean of the table to its last digit where the rounds are whole', () => {
		const rounds = adjustWorkloads[0]!.product(1)(5000);
		expect(Math.abs(rounds.check() - 91.452986)).toBeLessThan(2e-6);
	});
});

describe('the seeded input', () => {
	it('has variance 1 and no number beyond 2·√3', () => {
		const random = seededRandom(1);
		const values = Array.from({ length: 100_000 }, () => nearlyNormal(random));
		expect(Math.max(...values.map(Math.abs))).toBeLessThan(2 * Math.sqrt(3));
		expect(values.reduce((sum, value) => sum + value * value, 0) / values.length).toBeCloseTo(1, 1);
	});

	it('passes over draws in which two are equal', () => {
		const triples = seededTriples(77, 2000, 200);
		for (let at = 0; at < triples.length; at += 3) expect(new Set(triples.subarray(at, at + 3)).size).toBe(3);
		expect(triples.length / 3).toBeLessThan(2000);
	});
});

describe('the quick ways', () => {
	it('turn as the turns of Jacobi do, near a line and mirrored as well', () => {
		const random = seededRandom(5);
		const [quick, slow, singular, other] = [new Float64Array(9), new Float64Array(9), new Float64Array(3), new Float64Array(3)];
		for (let round = 0; round < 3000; round++) {
			const scale = [1, 10 ** (-3 * random()), 10 ** (-4 * random())];
			const cross = new Float64Array(9);
			for (let i = 0; i < 3 + (round % 5); i++) {
				const x = scale.map((size) => size * (random() - 0.5));
				const y = x.map((value, k) => (k === 2 && round % 4 === 0 ? -value : value) + 1e-3 * random());
				for (let k = 0; k < 9; k++) cross[k]! += x[Math.floor(k / 3)]! * y[k % 3]!;
			}
			bestTurn(cross, quick, singular);
			bestRotation(cross, slow, other);
			const gap = (other[1]! + other[2]!) / other[0]!;
			for (let k = 0; k < 9; k++) expect(Math.abs(quick[k]! - slow[k]!) * gap).toBeLessThan(1e-13);
			for (let k = 0; k < 3; k++) expect(Math.abs(singular[k]! - other[k]!)).toBeLessThan(1e-8 * other[0]!);
		}
	});

	it('refuse points on a line, in one place, and fewer than three', () => {
		const line = Float64Array.of(0, 0, 0, 1, 2, 3, 2, 4, 6, 5, 10, 15);
		expect(fitRigid(line, line, 0, 4, newRigidFit())).toBe(false);
		expect(fitRigid(new Float64Array(12).fill(7), line, 0, 4, newRigidFit())).toBe(false);
		const { survey, control } = seededPairs(3, 3);
		expect(fitRigid(survey, control, 0, 3, newRigidFit())).toBe(true);
		expect(fitRigid(survey, control, 0, 2, newRigidFit())).toBe(false);
	});

	it('find as large a group as trying every three and every pair does', () => {
		for (let seed = 1; seed <= 20; seed++) {
			const count = 14;
			const { survey, control } = seededPairs(9900 + seed, count);
			const random = seededRandom(seed);
			for (let i = 0; i < count; i++) if (random() < 0.4) control[3 * i + Math.floor(3 * random())]! += 0.2 * (random() - 0.5);
			const toleranceM = 0.012;
			const pose = new Float64Array(12);
			let most = 0;
			for (let i = 0; i < count; i++) {
				for (let j = i + 1; j < count; j++) {
					for (let k = j + 1; k < count; k++) {
						if (!triadPose(survey, control, i, j, k, pose)) continue;
						const three = Float64Array.from([i, j, k].flatMap((p) => [...survey.subarray(3 * p, 3 * p + 3)]));
						const known = Float64Array.from([i, j, k].flatMap((p) => [...control.subarray(3 * p, 3 * p + 3)]));
						// A pose that its own three do not agree with is no hypothesis.
						if (countWithin(three, known, 3, pose, toleranceM) === 3)
							most = Math.max(most, countWithin(survey, control, count, pose, toleranceM));
					}
				}
			}
			expect(largestAgreement(survey, control, count, toleranceM).size).toBe(most);
		}
	});
});
