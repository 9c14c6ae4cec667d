import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeCheckpoints } from '#shared/model/place-checkpoints.ts';
import { box, cellBody, insideOut, type MadeMesh, moved, ownOf, type Point, roundBody, woundAtRandom } from './made-mesh.ts';

const NEAR_M = 1e-6;
const place = (className: string, mesh: MadeMesh, name = '') => placeCheckpoints({ class: className, name, ...mesh });
const yaw = fc.double({ min: -Math.PI, max: Math.PI, noNaN: true });
// Up to map coordinates: five million metres from the origin.
const shift = fc.tuple(
	fc.double({ min: -5e6, max: 5e6, noNaN: true }),
	fc.double({ min: -5e6, max: 5e6, noNaN: true }),
	fc.double({ min: -100, max: 1000, noNaN: true }),
) as fc.Arbitrary<Point>;
const size = (min: number, max: number) => fc.double({ min, max, noNaN: true });

/** In the body's own axes: which way a direction looks. */
const ownDirection = (direction: readonly number[], yawRad: number): Point => ownOf(direction, yawRad, [0, 0, 0]);

describe('columns', () => {
	it('stand where they are built: plan, level and every flat side, wound either way, turned and far away', () => {
		fc.assert(
			fc.property(size(0.2, 1.2), size(0.2, 1.2), size(2.4, 6), yaw, shift, fc.boolean(), (x, y, z, yawRad, at, isInsideOut) => {
				const mesh = moved(box(x, y, z), yawRad, at);
				const placed = place('IfcColumn', isInsideOut ? insideOut(mesh) : mesh);
				expect(placed.kind).toBe('column');
				const own = placed.drafts.map((draft) => ({ ...draft, own: ownOf(draft.place, yawRad, at) }));
				expect(own.filter(({ characteristic }) => characteristic === 'plan')).toHaveLength(2);
				expect(own.filter(({ characteristic }) => characteristic === 'level')).toHaveLength(1);
				expect(own.filter(({ characteristic }) => characteristic === 'face')).toHaveLength(12);
				for (const draft of own) {
					if (draft.characteristic !== 'face') {
						expect(Math.hypot(draft.own[0], draft.own[1])).toBeLessThan(NEAR_M);
						continue;
					}
					const d = ownDirection(draft.direction!, yawRad);
					// On the side it looks from, in the middle of its width.
					expect(Math.abs(d[0]) > 0.5 ? draft.own[0] * Math.sign(d[0]) : draft.own[1] * Math.sign(d[1])).toBeCloseTo(
						Math.abs(d[0]) > 0.5 ? x / 2 : y / 2,
						6,
					);
					expect(Math.abs(Math.abs(d[0]) > 0.5 ? draft.own[1] : draft.own[0])).toBeLessThan(NEAR_M);
					expect(Math.min(...[0.3, z / 2, z - 0.3].map((row) => Math.abs(row - draft.own[2])))).toBeLessThan(NEAR_M);
					expect(draft.label).toContain(`${(Math.round(draft.own[2] * 10) / 10).toFixed(1)} m above its base`);
				}
				const level = own.find(({ characteristic }) => characteristic === 'level')!;
				expect(level.own[2]).toBeCloseTo(z, 6);
				expect(level.surface).toEqual([0, 0, level.place[2]]);
				expect(placed.sizesM.height).toBeCloseTo(z, 6);
				expect(placed.sizesM.thickness).toBeCloseTo(Math.min(x, y), 6);
			}),
			{ numRuns: 60 },
		);
	});

	it.each([8, 12, 24, 96])('that are round with %i sides have their centre and diameter, and no faces', (sides) => {
		const placed = place('IfcColumn', moved(roundBody(0.3, 4, sides), 0.3, [392_500, 5_820_300, 34]));
		const plans = placed.drafts.filter(({ characteristic }) => characteristic === 'plan');
		expect(plans).toHaveLength(2);
		for (const plan of plans) {
			expect(plan.place[0]).toBeCloseTo(392_500, 6);
			expect(plan.place[1]).toBeCloseTo(5_820_300, 6);
		}
		// Eight sides are an octagon: nobody can tell.
		if (sides > 8) {
			expect(placed.drafts.filter(({ characteristic }) => characteristic === 'face')).toEqual([]);
			expect(placed.sizesM.thickness).toBeCloseTo(0.6, 6);
		}
	});

	it('that lean have the plan of both ends of their axis', () => {
		const lean = moved(box(0.4, 0.4, 4), 0, [0, 0, 0]);
		for (let at = 0; at < lean.xyzM.length; at += 3) lean.xyzM[at]! += 0.1 * lean.xyzM[at + 2]!;
		const plans = place('IfcColumn', lean).drafts.filter(({ characteristic }) => characteristic === 'plan');
		expect(plans.map((plan) => plan.place.map((part) => Math.round(part * 1e6) / 1e6 + 0))).toEqual([
			[0, 0, 0],
			[0.4, 0, 4],
		]);
	});

	it('of an I section offer their flanges, never the web behind them', () => {
		const mesh = cellBody([-0.15, -0.005, 0.005, 0.15], [-0.15, -0.13, 0.13, 0.15], [0, 3], (i, j) => j !== 1 || i === 1);
		const faces = place('IfcColumn', mesh).drafts.filter(({ characteristic }) => characteristic === 'face');
		expect(faces.length).toBe(6);
		for (const face of faces) expect(Math.abs(face.place[1])).toBeCloseTo(0.15, 6);
	});
});

describe('walls', () => {
	it('have faces that are clear of openings and edges on both sides, however they are turned', () => {
		fc.assert(
			fc.property(size(3, 12), size(0.15, 0.5), size(2.4, 5), size(0.2, 0.8), yaw, shift, (length, thickness, height, from, yawRad, at) => {
				const [o0, o1] = [length * from - 0.6, length * from + 0.6];
				const mesh = moved(
					cellBody(
						[0, Math.max(0.2, o0), Math.min(length - 0.2, o1), length],
						[0, thickness],
						[0, 2.1, height],
						(i, _, k) => !(i === 1 && k === 0),
					),
					yawRad,
					at,
				);
				const placed = place('IfcWall', mesh);
				expect(placed.kind).toBe('wall');
				const sides = placed.drafts.filter(
					({ characteristic, direction }) => characteristic === 'face' && Math.abs(ownDirection(direction!, yawRad)[1]) > 0.5,
				);
				expect(new Set(sides.map(({ direction }) => Math.sign(ownDirection(direction!, yawRad)[1]))).size).toBe(2);
				for (const { place: p, direction } of sides) {
					const own = ownOf(p, yawRad, at);
					expect(own[1]).toBeCloseTo(ownDirection(direction!, yawRad)[1] > 0 ? thickness : 0, 6);
					const edge = 0.1 - NEAR_M;
					expect(own[0] > edge && own[0] < length - edge && own[2] > edge && own[2] < height - edge).toBe(true);
					const [left, right] = [Math.max(0.2, o0), Math.min(length - 0.2, o1)];
					// Sixteen places on a circle of 0.1 m: a corner may come as near as 0.0786 m between two of them.
					expect(Math.hypot(Math.max(left - own[0], 0, own[0] - right), Math.max(own[2] - 2.1, 0))).toBeGreaterThan(0.076);
				}
				// Not the door's head, though it may be wider than what is left above.
				for (const level of placed.drafts.filter(({ code }) => code === 'T')) expect(level.place[2] - at[2]).toBeCloseTo(height, 6);
				expect(placed.sizesM.thickness).toBeCloseTo(thickness, 6);
				expect(placed.sizesM.length).toBeCloseTo(length, 6);
			}),
			{
				numRuns: 60,
				// The door's corner lies beside the place, a hair above its row.
				examples: [
					[
						11.45391669028982,
						0.413004090273121,
						4.342069746021497,
						0.23656135075955978,
						-2.482393291675549e-126,
						[-4999999.999999994, -2.0085927276819764e-143, -0],
					],
				],
			},
		);
	});

	it('given as open shells look outward, however each triangle is wound', () => {
		fc.assert(
			fc.property(fc.array(fc.boolean(), { minLength: 12, maxLength: 12 }), yaw, (turned, yawRad) => {
				const closed = box(4, 0.3, 3);
				// Without its lower side: nothing is enclosed.
				const open = { xyzM: closed.xyzM, triangles: closed.triangles.filter((_, at) => Math.floor(at / 6) !== 4) };
				const mesh = moved(
					woundAtRandom(open, (triangle) => turned[triangle]!),
					yawRad,
					[100, 200, 0],
				);
				for (const { place: p, direction } of place('IfcWall', mesh).drafts) {
					if (!direction) continue;
					const own = ownOf(p, yawRad, [100, 200, 0]);
					const d = ownDirection(direction, yawRad);
					expect(own[0] * d[0] + own[1] * d[1]).toBeGreaterThan(0.1);
				}
			}),
			{ numRuns: 60 },
		);
	});

	it('that are one sheet get no checkpoint, and are told why', () => {
		const sheet = { xyzM: Float64Array.from([0, 0, 0, 4, 0, 0, 4, 0, 3, 0, 0, 3]), triangles: Uint32Array.from([0, 1, 2, 0, 2, 3]) };
		const placed = place('IfcWall', sheet);
		expect(placed.drafts).toEqual([]);
		expect(placed.why).toMatch(/no two flat, opposite outer sides/);
	});
});

describe('slabs', () => {
	it('with falls have levels on the true surface, away from edges and openings, and faces on their edges', () => {
		fc.assert(
			fc.property(
				size(2, 30),
				size(2, 20),
				size(0.12, 0.6),
				size(-0.02, 0.02),
				size(-0.02, 0.02),
				yaw,
				shift,
				(x, y, thickness, fx, fy, yawRad, at) => {
					const isHole = x > 6 && y > 6;
					const mesh = moved(
						cellBody(
							isHole ? [-x / 2, -1, 1, x / 2] : [-x / 2, x / 2],
							isHole ? [-y / 2, -1, 1, y / 2] : [-y / 2, y / 2],
							[0, thickness],
							(i, j) => !(isHole && i === 1 && j === 1),
						),
						yawRad,
						at,
						[fx, fy],
					);
					const placed = place('IfcSlab', mesh);
					const levels = placed.drafts.filter(({ characteristic }) => characteristic === 'level');
					expect(levels.some(({ isSoffit }) => isSoffit) && levels.some(({ isSoffit }) => !isSoffit)).toBe(true);
					for (const level of levels) {
						const own = ownOf(level.place, yawRad, at);
						// A fall of less than 0.02 mm over the whole slab counts as flat.
						expect(Math.abs(own[2] - (level.isSoffit ? 0 : thickness) - fx * own[0] - fy * own[1])).toBeLessThan(0.00002);
						expect(Math.abs(own[0])).toBeLessThan(x / 2 - 0.2);
						expect(Math.abs(own[1])).toBeLessThan(y / 2 - 0.2);
						expect(isHole && Math.abs(own[0]) < 1.2 && Math.abs(own[1]) < 1.2 && (Math.abs(own[0]) < 1 || Math.abs(own[1]) < 1)).toBe(
							false,
						);
						// The surface holds half a metre on as well.
						const [a, b, c] = level.surface!;
						const beside: Point = [level.place[0] + 0.3, level.place[1] - 0.4, 0];
						const besideOwn = ownOf(beside, yawRad, at);
						expect(
							Math.abs(
								a * beside[0] + b * beside[1] + c - at[2] - (level.isSoffit ? 0 : thickness) - fx * besideOwn[0] - fy * besideOwn[1],
							),
						).toBeLessThan(0.00002);
					}
				},
			),
			{ numRuns: 60 },
		);
	});

	it('written as slabs but standing are taken for walls, and beams for what they are', () => {
		expect(place('IfcSlab', box(5, 0.35, 3)).kind).toBe('wall');
		const beam = place('IfcBeam', box(6, 0.3, 0.5));
		expect(beam.kind).toBe('beam');
		expect(beam.drafts.some(({ isSoffit }) => isSoffit)).toBe(true);
		expect(beam.sizesM.length).toBeCloseTo(6, 9);
		expect(beam.sizesM.height).toBeCloseTo(0.5, 9);
		expect(beam.sizesM.thickness).toBeCloseTo(0.3, 9);
	});
});

describe('bolts and plates', () => {
	it('bolts have plan and level at their top', () => {
		const placed = place('IfcMechanicalFastener', moved(roundBody(0.012, 0.6, 12), 0, [10, 20, -0.48]));
		expect(placed.drafts.map(({ characteristic, place: p }) => [characteristic, ...p.map((part) => Math.round(part * 1e7) / 1e7)])).toEqual(
			[
				['plan', 10, 20, 0.12],
				['level', 10, 20, 0.12],
			],
		);
	});

	it('a plate with anchors shows the face that its anchors do not', () => {
		const plate = cellBody(
			[-0.15, -0.02, 0.02, 0.15],
			[0, 0.2, 0.22],
			[-0.15, -0.02, 0.02, 0.15],
			(i, j, k) => j === 1 || (i === 1 && k === 1),
		);
		const placed = place('IfcDiscreteAccessory', plate);
		const face = placed.drafts.find(({ characteristic }) => characteristic === 'face')!;
		expect(face.label).toBe('Outer face, middle');
		expect(face.direction!.map((part) => Math.round(part * 1e9) / 1e9 + 0)).toEqual([0, 1, 0]);
		expect(face.place.map((part) => Math.round(part * 1e9) / 1e9 + 0)).toEqual([0, 0.22, 0]);
		expect(placed.sizesM.thickness).toBeCloseTo(0.02, 9);
	});
});

describe('the spacing', () => {
	it('is the widest step between neighbours of a row, and what is usual is not changed by saying it', () => {
		fc.assert(
			fc.property(size(3, 20), size(2.4, 6), size(0.3, 6), (length, height, spacingM) => {
				const wall = { class: 'IfcWall', name: '', ...box(length, 0.3, height) };
				expect(placeCheckpoints(wall, { faceSpacingM: 2, levelSpacingM: 3 })).toEqual(placeCheckpoints(wall));
				const { drafts } = placeCheckpoints(wall, { faceSpacingM: spacingM, levelSpacingM: spacingM });
				const widest = (places: number[]): number =>
					Math.max(
						0,
						...[...new Set(places.map((each) => each.toFixed(6)))]
							.map(Number)
							.sort((a, b) => a - b)
							.map((each, k, all) => (k === 0 ? 0 : each - all[k - 1]!)),
					);
				const south = drafts.filter(({ direction }) => direction !== null && direction[1] < -0.99);
				const tops = drafts.filter(({ code }) => code === 'T');
				// At most 60 a row, whatever is wished.
				const allowedM = Math.max(spacingM, length / 59) + 1e-6;
				expect(widest(south.map(({ place: at }) => at[0]))).toBeLessThanOrEqual(allowedM);
				expect(widest(tops.map(({ place: at }) => at[0]))).toBeLessThanOrEqual(allowedM);
			}),
			{ numRuns: 60 },
		);
	});
});
