import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { gridOfPicked } from '#shared/model/picked-axes.ts';
import { type ComparedElement, sameElements } from '#shared/model/same-elements.ts';

const coordinate = fc.double({ min: -500, max: 500, noNaN: true });
const body = fc.record({ at: fc.tuple(coordinate, coordinate, coordinate), size: fc.double({ min: 0.1, max: 5, noNaN: true }) });
const element = (globalId: string, at: Vector3, size: number, className = 'IfcColumn'): ComparedElement => ({
	globalId,
	class: className,
	boxM: { min: at, max: [at[0] + size, at[1] + size, at[2] + size] },
	checkpoints: [{ characteristic: 'plan', place: at }],
});

describe('elements that are the same to 1 mm', () => {
	it('are those that brute force finds, whatever was moved by how little or much', () => {
		fc.assert(
			fc.property(
				fc.array(body, { maxLength: 12 }),
				fc.array(fc.double({ min: -0.003, max: 0.003, noNaN: true }), { minLength: 12, maxLength: 12 }),
				(bodies, shifts) => {
					const older = bodies.map(({ at, size }, k) => element(`old${k}`, at, size));
					const newer = bodies.map(({ at, size }, k) => element(`new${k}`, [at[0] + shifts[k]!, at[1], at[2]], size));
					const isSame = (one: ComparedElement, other: ComparedElement): boolean =>
						(['min', 'max'] as const).every((end) => [0, 1, 2].every((k) => Math.abs(one.boxM![end][k]! - other.boxM![end][k]!) <= 0.001));
					const expected = newer.flatMap((one) => {
						const same = older.filter((other) => isSame(one, other));
						return same.length === 1 && newer.filter((other) => isSame(other, same[0]!)).length === 1
							? [[one.globalId, same[0]!.globalId]]
							: [];
					});
					expect(sameElements(newer, older, false)).toEqual(expected);
				},
			),
			{ numRuns: 300 },
		);
	});

	it('are not those that kept their GlobalId, are of another class, stand twice, or are shaped otherwise', () => {
		const old = element('a', [0, 0, 0], 1);
		expect(sameElements([element('b', [0, 0, 0], 1)], [old], true)).toEqual([['b', 'a']]);
		expect(sameElements([element('a', [0, 0, 0], 1)], [old], true)).toEqual([]);
		expect(sameElements([element('b', [0, 0, 0], 1, 'IfcPile')], [old], true)).toEqual([]);
		expect(sameElements([element('b', [0, 0, 0], 1), element('c', [0, 0, 0], 1)], [old], true)).toEqual([]);
		const hollow = { ...element('b', [0, 0, 0], 1), checkpoints: [{ characteristic: 'face' as const, place: [0, 0, 0] as Vector3 }] };
		expect(sameElements([hollow], [old], true)).toEqual([]);
		expect(sameElements([hollow], [old], false)).toEqual([['b', 'a']]);
	});
});

describe('picked axes', () => {
	it('go by the first one’s direction: along it u, across it v', () => {
		const axis = (tag: string, to: [number, number]) => ({ tag, from: [0, 0] as [number, number], to });
		const grid = gridOfPicked([axis('A', [10, 1]), axis('B', [-9, -2]), axis('1', [-1, 10]), axis('2', [3, -9])]);
		expect(grid.map(({ tag, direction }) => tag + direction)).toEqual(['Au', 'Bu', '1v', '2v']);
		expect(gridOfPicked([])).toEqual([]);
	});
});
