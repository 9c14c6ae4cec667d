import { describe, expect, it } from 'vitest';
import type { CheckInputCheckpoint } from '#shared/check/check-input.ts';
import type { DerivedResult } from '#shared/check/check-schema.ts';
import { elementSummary } from '#shared/check/element-summary.ts';
import { runCheck } from '#shared/check/run-check.ts';
import { writeCheckCsv } from '#shared/check/write-check-csv.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { aCheck, aCheckpoint, anElement, aPoint, at } from './measured-world.ts';

/** Checks an element as built by `move` and says it in a phrase. */
function phrase(checkpoints: CheckInputCheckpoint[], move: (c: CheckInputCheckpoint) => Vector3): string | null {
	const named = checkpoints.map((c, k) => ({ ...c, id: `c${k}`, mark: `m${k}` }));
	const points = named.map((c) => {
		const [e, n, h] = move(c);
		return aPoint([c.place[0] + e, c.place[1] + n, c.place[2] + h], { name: c.mark });
	});
	return elementSummary(runCheck(aCheck({ checkpoints: named, points })).deviations);
}

const column = [0.3, 2.7].flatMap((height) =>
	(
		[
			[1, 0],
			[0, 1],
			[-1, 0],
			[0, -1],
		] as const
	).map(([e, n]) => aCheckpoint({ place: at(0.2 * e, 0.2 * n, height), direction: [e, n, 0] })),
);
const heightOf = (c: CheckInputCheckpoint) => c.place[2] - at(0, 0, 0)[2];

describe('an element in a phrase', () => {
	it('leans', () => {
		expect(phrase(column, (c) => [(0.023 * heightOf(c)) / 2.7, 0, 0])).toBe('leans east, 23 at the top');
		expect(phrase(column, (c) => [(-0.016 * heightOf(c)) / 2.7, (-0.017 * heightOf(c)) / 2.7, 0])).toBe('leans south-west, 23 at the top');
	});
	it('leans only by more than is known', () => {
		expect(phrase(column, (c) => [(0.003 * heightOf(c)) / 2.7, 0, 0])).toBeNull();
		// Shifted as a whole it does not lean.
		expect(phrase(column, () => [0.02, 0, 0])).toBeNull();
	});
	it('is proud all round', () => {
		expect(phrase(column, ({ direction }) => [0.009 * direction![0], 0.009 * direction![1], 0])).toBe('9 proud all round');
	});
	const plan = (places: Vector3[]) => places.map((place) => aCheckpoint({ characteristic: 'plan', direction: null, place }));
	it('lies beside its mark', () => {
		expect(phrase(plan([at(3, 3, 0)]), () => [0.0051, -0.0062, 0])).toBe('5 east, 6 south of its mark');
		expect(phrase(plan([at(3, 3, 0)]), () => [0.002, -0.001, 0])).toBeNull();
	});
	const bolts = [at(3, 3, 0), at(3.4, 3, 0), at(3.4, 3.4, 0), at(3, 3.4, 0)];
	const middle = at(3.2, 3.2, 0);
	it('is a group shifted and turned', () => {
		const turnedBy =
			(rad: number, east = 0) =>
			(c: CheckInputCheckpoint): Vector3 => [east - rad * (c.place[1] - middle[1]), rad * (c.place[0] - middle[0]), 0];
		expect(phrase(plan(bolts), turnedBy(0.03))).toBe('turned counter-clockwise, 8 at the outermost');
		expect(phrase(plan(bolts), turnedBy(-0.03, 0.012))).toBe('the group 12 east of its marks, turned clockwise, 8 at the outermost');
		expect(phrase(plan(bolts), turnedBy(0.002))).toBeNull();
	});
	it('is low', () => {
		const levels = [at(0, 0, 4), at(3, 0, 4), at(0, 3, 4)].map((place) => aCheckpoint({ characteristic: 'level', direction: null, place }));
		expect(phrase(levels, () => [0, 0, -0.008])).toBe('8 low on average');
		expect(phrase(levels, (c) => [0, 0, c.place[0] > at(1, 0, 0)[0] ? 0.02 : -0.02])).toBeNull();
	});
});

describe('a check as CSV', () => {
	const csv = (mark: string, label = 'East face, 1.5 m above', derived: readonly DerivedResult[] = []) => {
		const { deviations } = runCheck(
			aCheck({
				checkpoints: [aCheckpoint({ label }), aCheckpoint({ id: 'c2', mark: 'x', place: at(9, 9, 9) })],
				points: [aPoint(at(0.1958, 0, 1.5))],
			}),
		);
		const element = { ...anElement({ mark }), globalId: '=1+1' };
		return writeCheckCsv(
			deviations,
			derived,
			() => element,
			() => 'Station 1',
		).split('\r\n');
	};
	it('has a row for every checkpoint, units in the header, nothing where nothing was measured', () => {
		const [head, first, second, end] = csv('C3-G');
		expect(end).toBe('');
		const cells = first!.replace('"East face, 1.5 m above"', 'label').replace('"Column C/3, ground"', 'title').split(',');
		const row = Object.fromEntries(head!.split(',').map((name, k) => [name, cells[k]]));
		expect(row).toMatchObject({
			mark: 'C3-G',
			deviation_mm: '-4.20',
			design_easting_m: '458870.263',
			lower_limit_mm: '-10.00',
			verdict: 'within',
			setup: 'Station 1',
			offset_east_mm: '',
		});
		expect(Number(row.conformity)).toBeGreaterThan(0.97);
		expect(second).toContain(',not-measured,,');
	});
	it('has a row for every derived result after them, naming its checkpoints', () => {
		const leaning: DerivedResult = {
			elementId: 'e1',
			characteristic: 'plumb',
			label: 'along east over 2.4 m',
			deviationMm: -23.04,
			uncertaintyMm: 3,
			limitsMm: [-12, 12],
			ruleId: 'plumb',
			verdict: 'outside',
			conformity: 0,
			from: ['c1', 'c2'],
		};
		const [head, , , third, end] = csv('C3-G', 'label', [leaning]);
		const cells = third!.replace('"Column C/3, ground"', 'title').replace('"Plumb, east–west, over 2.4 m"', 'place').split(',');
		expect(end).toBe('');
		expect(cells).toHaveLength(head!.split(',').length);
		expect(Object.fromEntries(head!.split(',').map((name, k) => [name, cells[k]]))).toMatchObject({
			checkpoint: 'c1 c2',
			mark: 'C3-G',
			characteristic: 'plumb',
			place: 'place',
			design_easting_m: '',
			deviation_mm: '-23.04',
			uncertainty_mm: '3.00',
			lower_limit_mm: '-12.00',
			beyond_mm: '11.04',
			verdict: 'outside',
			rule: 'plumb',
			point_count: '2',
		});
	});
	it.each(['=cmd()', '+1', '-1', '@x', '\t=1', ' =1'])('makes %j no formula', (mark) => {
		expect(csv(mark)[1]!.includes(`'${mark}`)).toBe(true);
		expect(csv('a')[1]).toContain("'=1+1");
	});
	it('quotes what holds commas and quotes', () => {
		expect(csv('a', 'He said "up", then\nleft').join('\r\n')).toContain('"He said ""up"", then\nleft"');
	});
});
