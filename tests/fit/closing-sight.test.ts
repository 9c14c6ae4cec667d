import { describe, expect, it } from 'vitest';
import { movedSetupFindings, type TargetSight } from '#shared/fit/closing-sight.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';

const sigmaM = [0.001, 0.001, 0.0015] as const;

/** Targets sighted at the beginning, work between, and again at the end, each sight off by what `noise` draws, in σ. */
function sights(count: number, noise: () => number): TargetSight[] {
	const round = (firstRow: number) =>
		Array.from({ length: count }, (_, i): TargetSight => {
			const truth = [20 * Math.cos(i), 20 * Math.sin(i), i / 3] as const;
			const off = (axis: 0 | 1 | 2) => truth[axis] + noise() * sigmaM[axis];
			return { name: `T${i + 1}`, row: firstRow + i, surveyM: [off(0), off(1), off(2)], sigmaM };
		});
	return [...round(2), ...round(200)];
}

/** Box and Muller: tails as a normal distribution has them, which sums of uniform numbers have not. */
function normalOf(random: () => number): () => number {
	return () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

function moved(sight: TargetSight, axis: 0 | 1 | 2, byM: number): TargetSight {
	const [x, y, z] = sight.surveyM;
	return { ...sight, surveyM: [x + (axis === 0 ? byM : 0), y + (axis === 1 ? byM : 0), z + (axis === 2 ? byM : 0)] };
}

const aSight = (over: Partial<TargetSight>): TargetSight => ({ name: 'T1', row: 2, surveyM: [1, 2, 3], sigmaM: null, ...over });

describe('a closing sight', () => {
	it.each([1, 3, 6, 10])('of %i targets that did not move is quiet but for under 0.5 % of 2 000 surveys', (count) => {
		const normal = normalOf(seededRandom(1967 + count));
		let alarms = 0;
		for (let run = 0; run < 2000; run++) if (movedSetupFindings(sights(count, normal)).length > 0) alarms++;
		expect(alarms).toBeLessThan(10);
	});

	it('always shows a target that moved by ten σ, among sights of up to two σ of noise', () => {
		const random = seededRandom(10);
		const noise = () => 4 * random() - 2;
		for (let run = 0; run < 2000; run++) {
			const count = 1 + Math.floor(10 * random());
			const target = Math.floor(count * random());
			const axis = Math.floor(3 * random()) as 0 | 1 | 2;
			const sign = random() < 0.5 ? -1 : 1;
			const all = sights(count, noise).map((sight, i) => (i === count + target ? moved(sight, axis, sign * 10 * sigmaM[axis]) : sight));
			const found = movedSetupFindings(all);
			expect(found[0]?.pairs).toEqual([`T${target + 1}`]);
			expect(found[0]?.evidence.axis).toBe('xyz'[axis]);
			expect(Math.sign(found[0]?.evidence.differenceMm ?? 0)).toBe(sign);
		}
	});

	it('of one target is held against 3σ√2 on an axis, and a little more where three axes are looked at', () => {
		const pairOf = (byM: number) => [
			aSight({ sigmaM: [0.001, 0.001, 0.001] }),
			aSight({ row: 9, surveyM: [1 + byM, 2, 3], sigmaM: [0.001, 0.001, 0.001] }),
		];
		expect(movedSetupFindings(pairOf(0.0042))).toEqual([]);
		const [found] = movedSetupFindings(pairOf(0.006));
		// By hand: 1 − (1 − 0.0026998)^(1/3) = 0.00090074 two-sided, z = 3.3205; × √2 mm.
		expect(found?.evidence.limitMm).toBeCloseTo(4.696, 2);
		expect(found?.message).toMatch(
			/^T1 came back 6\.0 mm off along x when it was sighted again \(row 9 against row 2; .*instrument move\?$/,
		);
	});

	it('without σ is held against 3 mm, and says so', () => {
		const pairOf = (byM: number) => [aSight({}), aSight({ row: 9, surveyM: [1, 2, 3 + byM] })];
		expect(movedSetupFindings(pairOf(0.0029))).toEqual([]);
		const [found] = movedSetupFindings(pairOf(-0.0031));
		expect(found).toMatchObject({ code: 'moved-setup', evidence: { limitMm: 3, axis: 'z', isBySigma: false, firstRow: 2, lastRow: 9 } });
		expect(found?.message).toContain('no σ is known, so 3 mm is the limit');
		expect(movedSetupFindings(pairOf(0.0031).map((sight) => ({ ...sight, sigmaM: [0, 0, 0] })))).toHaveLength(1);
	});

	it('holds the first sight against the last by row, whatever the order they come in, and says up to where all was well', () => {
		const own = [
			aSight({ name: 'T1', row: 2 }),
			aSight({ name: 'T2', row: 3 }),
			aSight({ name: 'T3', row: 4 }),
			aSight({ name: 'T2', row: 40 }),
			aSight({ name: 'T1', row: 80, surveyM: [1.02, 2, 3] }),
			aSight({ name: 'T2', row: 81, surveyM: [1.03, 2, 3] }),
		];
		const found = movedSetupFindings([...own].reverse());
		expect(found.map(({ pairs }) => pairs)).toEqual([['T2'], ['T1']]);
		expect(found.map(({ evidence }) => evidence.lastGoodRow)).toEqual([40, 40]);
		const [roundOnly] = movedSetupFindings(own.filter(({ row }) => row !== 40));
		expect(roundOnly?.evidence).toMatchObject({ firstRow: 3, lastRow: 81, lastGoodRow: 4 });
	});

	it('is not asked of targets sighted once', () => {
		expect(movedSetupFindings([])).toEqual([]);
		expect(movedSetupFindings([aSight({}), aSight({ name: 'T2', row: 3, surveyM: [9, 9, 9] })])).toEqual([]);
	});
});
