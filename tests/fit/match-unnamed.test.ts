import { describe, expect, it } from 'vitest';
import { matchUnnamed, type UnnamedPoint } from '#shared/fit/match-unnamed.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { surveyScene, type Triple } from './survey-scene.ts';

/** `count` known marks of which every third is seen, and `strangers` that are none of them. */
function scene(
	seed: number,
	fit: 'levelled' | 'free',
	count: number,
	strangers: number,
): { targets: UnnamedPoint[]; control: UnnamedPoint[]; truth: Map<string, string> } {
	const { input } = surveyScene(seed, fit, count, { spread: 60 });
	const random = seededRandom(seed + 1);
	const control = input.pairs.map(({ name, control: point }) => ({ name: `C${name}`, point: point as Triple }));
	const seen = input.pairs.filter((_, i) => i % 3 === 0).map(({ name, survey }) => ({ name, point: survey as Triple }));
	const others = Array.from({ length: strangers }, (_, i) => ({
		name: `S${i}`,
		point: [60 * random() - 30, 60 * random() - 30, 15 * random()] as Triple,
	}));
	return {
		targets: [...others, ...seen].sort((a, b) => a.point[0] - b.point[0]),
		control,
		truth: new Map(seen.map(({ name }) => [name, `C${name}`])),
	};
}

describe('matching without names', () => {
	it.each(['levelled', 'free'] as const)('%s: finds every seen mark and leaves the strangers alone', (fit) => {
		for (let seed = 1; seed <= 15; seed++) {
			const { targets, control, truth } = scene(seed, fit, 21, 3);
			const { matches } = matchUnnamed({ fit, targets, control, toleranceM: 0.03 });
			expect(matches).toHaveLength(1);
			expect(new Map(matches[0]!.pairs.map(({ target, control: to }) => [target, to]))).toEqual(truth);
			expect(matches[0]!.strangers.sort()).toEqual(['S0', 'S1', 'S2']);
			expect(matches[0]!.rmsM).toBeLessThan(0.02);
		}
	});

	it('gives all that are as good, and picks none: a square turns four ways, and over', () => {
		const square: Triple[] = [
			[10, 10, 0],
			[-10, 10, 0],
			[-10, -10, 0],
			[10, -10, 0],
		];
		const named = (letter: string): UnnamedPoint[] => square.map((point, i) => ({ name: `${letter}${i}`, point }));
		const input = { targets: named('T'), control: named('C'), toleranceM: 0.01, leastMatched: 4 };
		const levelled = matchUnnamed({ ...input, fit: 'levelled' }).matches;
		expect(levelled).toHaveLength(4);
		expect(new Set(levelled.map(({ pairs }) => pairs.map(({ control }) => control).join())).size).toBe(4);
		expect(matchUnnamed({ ...input, fit: 'free' }).matches).toHaveLength(8);
	});

	it('finds nothing where nothing belongs together', () => {
		const { control } = scene(1, 'free', 12, 0);
		const { targets } = scene(50, 'free', 4, 6);
		expect(matchUnnamed({ fit: 'free', targets, control, toleranceM: 0.01 }).matches).toEqual([]);
		expect(matchUnnamed({ fit: 'free', targets: [], control, toleranceM: 0.01 }).matches).toEqual([]);
	});

	it('is not taken in by a mirror image', () => {
		const { targets, control } = scene(4, 'free', 21, 0);
		const mirrored = targets.map(({ name, point: [x, y, z] }) => ({ name, point: [x, -y, z] as Triple }));
		expect(matchUnnamed({ fit: 'free', targets: mirrored, control, toleranceM: 0.02, leastMatched: 5 }).matches).toEqual([]);
	});
});
