import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designToMap, mapFrameOf, mapScaleFinding, mapToDesign, partialMapToDesign } from '#shared/control/map-frame.ts';
import type { MapConversion } from '#shared/model/model-schema.ts';

const conversion = (over: Partial<MapConversion> = {}): MapConversion => ({
	eastings: 458870.063,
	northings: 5438232.99,
	orthogonalHeight: 113.7,
	xAxisAbscissa: 1,
	xAxisOrdinate: 0,
	scale: 1,
	mapUnitM: 1,
	crsName: null,
	...over,
});

/**
 * IFC 4.3 documentation, IfcMapConversion: one scale on x, y, z; then a turn about z by the direction (XAxisAbscissa, XAxisOrdinate), which
 * need not be of unit length; then the shift. Numbers computed independently. Local coordinates in the project's unit, map in the map's.
 */
const documented = [
	{ axis: [1, 0], scale: 1, origin: [500000, 5400000, 100], local: [10, 20, 3], map: [500010, 5400020, 103] },
	{ axis: [0, 1], scale: 1, origin: [500000, 5400000, 100], local: [10, 20, 3], map: [499980, 5400010, 103] },
	{
		axis: [0.8660254037844387, 0.5],
		scale: 1,
		origin: [458870.063, 5438232.99, 113.7],
		local: [12.5, -7.25, 3.1],
		map: [458884.51331754733, 5438232.961315823, 116.8],
	},
	{ axis: [3, 4], scale: 1, origin: [1000, 2000, 0], local: [5, 0, 1], map: [1003, 2004, 1] },
	{
		axis: [0.6, -0.8],
		scale: 0.001,
		origin: [458870.063, 5438232.99, 113.7],
		local: [12500, -7250, 3100],
		map: [458871.76300000004, 5438218.640000001, 116.8],
	},
	{ axis: [1, 1], scale: 0.3048, origin: [2000000, 600000, 50], local: [100, 0, 10], map: [2000021.5526146905, 600021.5526146906, 53.048] },
] as const;

describe('design and map', () => {
	it.each(documented.flatMap((example, k) => [1, 0.001, 0.3048].map((metresPerUnit) => ({ ...example, k, metresPerUnit }))))(
		'documented example $k in a project unit of $metresPerUnit m',
		({ axis, scale, origin, local, map, metresPerUnit }) => {
			const frame = mapFrameOf(
				conversion({
					eastings: origin[0],
					northings: origin[1],
					orthogonalHeight: origin[2],
					xAxisAbscissa: axis[0],
					xAxisOrdinate: axis[1],
					scale,
				}),
				metresPerUnit,
			);
			const design = [local[0] * metresPerUnit, local[1] * metresPerUnit, local[2] * metresPerUnit] as const;
			designToMap(frame, design).forEach((value, k) => {
				expect(Math.abs(value - map[k]!)).toBeLessThan(2e-9);
			});
			mapToDesign(frame, map).forEach((value, k) => {
				expect(Math.abs(value - design[k]!)).toBeLessThan(2e-9 * Math.max(1, metresPerUnit / scale));
			});
		},
	);
	it('minds a map in feet', () => {
		const frame = mapFrameOf(
			conversion({ eastings: 1000, northings: 2000, orthogonalHeight: 10, mapUnitM: 1200 / 3937, scale: 3937 / 1200 }),
			1,
		);
		designToMap(frame, [1, 2, 3]).forEach((value, k) => {
			expect(value).toBeCloseTo([(1000 * 1200) / 3937 + 1, (2000 * 1200) / 3937 + 2, (10 * 1200) / 3937 + 3][k]!, 9);
		});
	});
	it('comes back to where it was, at map size, and keeps distances', () => {
		const metres = fc.double({ min: -5000, max: 5000, noNaN: true });
		fc.assert(
			fc.property(
				metres,
				metres,
				metres,
				fc.double({ min: 0, max: 6.3, noNaN: true }),
				fc.double({ min: 0.999, max: 1.001, noNaN: true }),
				(x, y, z, yaw, scale) => {
					const frame = mapFrameOf(conversion({ xAxisAbscissa: 2 * Math.cos(yaw), xAxisOrdinate: 2 * Math.sin(yaw), scale }), 1);
					const map = designToMap(frame, [x, y, z]);
					const back = mapToDesign(frame, map);
					for (const [k, value] of [x, y, z].entries()) expect(Math.abs(back[k]! - value)).toBeLessThan(4e-9);
					expect(Math.hypot(map[0] - frame.originM[0], map[1] - frame.originM[1], map[2] - frame.originM[2])).toBeCloseTo(
						scale * Math.hypot(x, y, z),
						6,
					);
				},
			),
		);
	});
	it('carries a benchmark’s height alone and a plan without height', () => {
		const frame = mapFrameOf(conversion({ xAxisAbscissa: 0.6, xAxisOrdinate: 0.8 }), 1);
		expect(partialMapToDesign(frame, [null, null, 115.2])).toEqual([null, null, expect.closeTo(1.5, 9)]);
		const [e, n, h] = designToMap(frame, [3, -4, 7]);
		expect(partialMapToDesign(frame, [e, n, null])).toEqual([expect.closeTo(3, 8), expect.closeTo(-4, 8), null]);
		expect(partialMapToDesign(frame, [e, n, h])[2]).toBeCloseTo(7, 9);
	});
	it('refuses what gives no frame', () => {
		expect(() => mapFrameOf(conversion({ xAxisAbscissa: 0, xAxisOrdinate: 0 }), 1)).toThrow(RangeError);
		expect(() => mapFrameOf(conversion({ scale: 0 }), 1)).toThrow(RangeError);
		expect(() => mapFrameOf(conversion({ eastings: Number.NaN }), 1)).toThrow(RangeError);
	});
});

describe('a scale against the units', () => {
	it('is a finding where a file in millimetres leaves it out', () => {
		expect(mapScaleFinding(conversion(), 0.001)).toMatchObject({
			code: 'map-scale',
			evidence: { scale: 1, expectedScale: 0.001, metreScale: 1000 },
		});
		expect(mapScaleFinding(conversion({ scale: 0.001 }), 0.001)).toBeNull();
		expect(mapScaleFinding(conversion({ scale: 0.9996 }), 1)).toBeNull();
		expect(mapScaleFinding(conversion({ mapUnitM: 0.3048 }), 1)).toMatchObject({ code: 'map-scale' });
	});
});
