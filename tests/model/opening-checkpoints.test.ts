import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type PlacedElement, placeCheckpoints } from '#shared/model/place-checkpoints.ts';
import { cellBody, type MadeMesh, moved, ownOf, type Point, ringBody } from './made-mesh.ts';

const place = (className: string, mesh: MadeMesh) => placeCheckpoints({ class: className, name: '', ...mesh });
const yaw = fc.double({ min: -Math.PI, max: Math.PI, noNaN: true });
const shift = fc.tuple(
	fc.double({ min: -5e6, max: 5e6, noNaN: true }),
	fc.double({ min: -5e6, max: 5e6, noNaN: true }),
	fc.double({ min: -100, max: 1000, noNaN: true }),
) as fc.Arbitrary<Point>;
const size = (min: number, max: number) => fc.double({ min, max, noNaN: true });

const openingsOf = (placed: PlacedElement, yawRad: number, at: Point) =>
	placed.drafts
		.filter(({ code }) => code.startsWith('O'))
		.map((draft) => ({
			...draft,
			own: ownOf(draft.place, yawRad, at),
			ownDirection: draft.direction && ownOf(draft.direction, yawRad, [0, 0, 0]),
		}));

describe('openings in walls', () => {
	it('have both edges, head and sill of a window, both edges and the head of a door, however the wall stands', () => {
		fc.assert(
			fc.property(
				size(0.15, 0.5),
				size(0.9, 1.6),
				size(0.3, 1.1),
				size(0.8, 1.4),
				yaw,
				shift,
				(thickness, width, sill, tall, yawRad, at) => {
					// Door from 1 m on, window from 4 m on; another window of the same sill further on.
					const xs = [0, 1, 1 + width, 4, 4 + width, 7, 7 + width, 10];
					const mesh = moved(
						cellBody(
							xs,
							[0, thickness],
							[0, sill, sill + tall, 3.2],
							(i, _, k) => !((i === 1 && k < 2) || ((i === 3 || i === 5) && k === 1)),
						),
						yawRad,
						at,
					);
					const drafts = openingsOf(place('IfcWall', mesh), yawRad, at);
					const edges = drafts.filter(({ direction }) => direction !== null);
					expect(edges.map(({ own, ownDirection }) => `${own[0].toFixed(5)} ${ownDirection![0].toFixed(5)}`).sort()).toEqual(
						[1, 4, 7].flatMap((x) => [`${x.toFixed(5)} 1.00000`, `${(x + width).toFixed(5)} -1.00000`]).sort(),
					);
					for (const { own } of edges) {
						expect(own[1]).toBeCloseTo(thickness / 2, 5);
						expect(own[2]).toBeCloseTo(own[0] < 3 ? (sill + tall) / 2 : sill + tall / 2, 5);
					}
					const heads = drafts.filter(({ isSoffit }) => isSoffit);
					const sills = drafts.filter(({ isSoffit, direction }) => direction === null && !isSoffit);
					expect(heads.map(({ own }) => Math.round(own[0] * 1e4)).sort((a, b) => a - b)).toEqual(
						[1, 4, 7].map((x) => Math.round((x + width / 2) * 1e4)),
					);
					expect(sills.map(({ own }) => Math.round(own[0] * 1e4)).sort((a, b) => a - b)).toEqual(
						[4, 7].map((x) => Math.round((x + width / 2) * 1e4)),
					);
					for (const { own } of heads) expect(own[2]).toBeCloseTo(sill + tall, 5);
					for (const { own } of sills) expect(own[2]).toBeCloseTo(sill, 5);
				},
			),
			// First: a thin, turned wall whose heads were laid out along the model's axes.
			{ numRuns: 50, examples: [[0.15, 0.9, 0.3, 0.8, -0.17530614551131357, [0, 0, 0]]] },
		);
	});

	it('are named by the side that the edge is on, not by the way it looks', () => {
		const mesh = cellBody([0, 8, 9, 12], [0, 0.3], [0, 2, 3], (i, _, k) => !(i === 1 && k === 0));
		const labels = openingsOf(place('IfcWall', mesh), 0, [0, 0, 0]).map(({ label, code, own }) => `${code} ${own[0]} ${label}`);
		expect(labels.sort()).toEqual([
			"OE 9 Opening, east edge, 1.0 m above the wall's base, 3.0 m from the wall's east end",
			"OT 8.5 Opening, head, 2.0 m above the wall's base, 3.5 m from the wall's east end",
			"OW 8 Opening, west edge, 1.0 m above the wall's base, 4.0 m from the wall's east end",
		]);
	});

	it('are none where the wall is stepped: at its top, or under an overhang', () => {
		const stepped = cellBody([0, 3, 6, 10], [0, 0.3], [0, 1, 2, 3], (i, _, k) => k <= i);
		expect(openingsOf(place('IfcWall', stepped), 0, [0, 0, 0])).toEqual([]);
		const hanging = cellBody([0, 3, 6, 10], [0, 0.3], [0, 1, 2, 3], (i, _, k) => k >= i);
		expect(openingsOf(place('IfcWall', hanging), 0, [0, 0, 0])).toEqual([]);
	});

	it('do not show where a second body fills them', () => {
		const wall = cellBody([0, 4, 5, 10], [0, 0.3], [0, 2, 3], (i, _, k) => !(i === 1 && k === 0));
		const filling = cellBody([3.99, 5.01], [0.01, 0.29], [0, 2.01], () => true);
		const both: MadeMesh = {
			xyzM: Float64Array.from([...wall.xyzM, ...filling.xyzM]),
			triangles: Uint32Array.from([...wall.triangles, ...[...filling.triangles].map((vertex) => vertex + wall.xyzM.length / 3)]),
		};
		expect(openingsOf(place('IfcWall', both), 0, [0, 0, 0])).toEqual([]);
	});
});

describe('the base of a wall', () => {
	it('is one level, also beside a door', () => {
		fc.assert(
			fc.property(size(0.15, 0.5), yaw, shift, (thickness, yawRad, at) => {
				const mesh = moved(
					cellBody([0, 4.4, 5.4, 10], [0, thickness], [0, 2, 3], (i, _, k) => !(i === 1 && k === 0)),
					yawRad,
					at,
				);
				const base = place('IfcWall', mesh).drafts.filter(({ label }) => label === 'Base');
				expect(base).toHaveLength(1);
				expect(base[0]).toMatchObject({ characteristic: 'level', isSoffit: true, code: 'B' });
				const own = ownOf(base[0]!.place, yawRad, at);
				expect(own[2]).toBeCloseTo(0, 6);
				expect(own[0] < 4.4 || own[0] > 5.4).toBe(true);
			}),
			{ numRuns: 30 },
		);
	});
});

describe('openings and recesses of slabs', () => {
	it('have their edges in plan, looking into the opening', () => {
		fc.assert(
			fc.property(size(0.5, 3), size(0.5, 3), size(0.15, 0.6), yaw, shift, (a, b, thickness, yawRad, at) => {
				const mesh = moved(
					cellBody([-6, -a, a, 6], [-5, -b, b, 5], [0, thickness], (i, j) => !(i === 1 && j === 1)),
					yawRad,
					at,
				);
				const drafts = openingsOf(place('IfcSlab', mesh), yawRad, at);
				expect(drafts.map(({ label }) => label.split(',')[0])).toEqual(['Opening', 'Opening', 'Opening', 'Opening']);
				expect(
					drafts
						.map(({ own, ownDirection }) =>
							[...own, ...ownDirection!].map((part) => (Math.round(part * 1e5) / 1e5 + 0).toFixed(5)).join(' '),
						)
						.sort(),
				).toEqual(
					[
						[-a, 0, 1, 0],
						[a, 0, -1, 0],
						[0, -b, 0, 1],
						[0, b, 0, -1],
					]
						.map(([x, y, nx, ny]) =>
							[x!, y!, thickness / 2, nx!, ny!, 0].map((part) => (Math.round(part * 1e5) / 1e5 + 0).toFixed(5)).join(' '),
						)
						.sort(),
				);
			}),
			{ numRuns: 40 },
		);
	});

	it('that are wide recesses have a place each 3 m', () => {
		// An L: its two inner edges, 12 and 8 m long.
		const mesh = cellBody([0, 8, 20], [0, 6, 14], [0, 0.3], (i, j) => !(i === 1 && j === 1));
		const drafts = openingsOf(place('IfcSlab', mesh), 0, [0, 0, 0]);
		expect(new Set(drafts.map(({ label }) => label))).toEqual(new Set(['Recess, west edge', 'Recess, south edge']));
		for (const { own, ownDirection } of drafts) {
			const isWest = ownDirection![0] > 0.5;
			expect(isWest ? own[0] : own[1]).toBeCloseTo(isWest ? 8 : 6, 9);
			expect(own[2]).toBeCloseTo(0.15, 9);
		}
		expect(drafts.filter(({ label }) => label.includes('west'))).toHaveLength(4);
	});

	it.each([12, 24, 96])('that are round with %i sides have their centre', (sides) => {
		const [x, y] = [392_500.25, 5_820_300.5];
		const mesh = moved(ringBody(3, 0.15, 0.4, sides), 0.3, [x, y, 34]);
		const centres = openingsOf(place('IfcSlab', mesh), 0.3, [x, y, 34]);
		expect(centres).toHaveLength(1);
		expect(centres[0]!.characteristic).toBe('plan');
		expect(centres[0]!.label).toBe('Round opening of 300 mm, centre');
		expect(Math.hypot(centres[0]!.own[0], centres[0]!.own[1])).toBeLessThan(1e-6);
		expect(centres[0]!.own[2]).toBeCloseTo(0.4, 6);
	});
});
