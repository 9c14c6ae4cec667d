import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exaggerationOf, hasLine, marksOf, nearestMark } from '#src/features/check/deviation-mark.ts';
import { aCheck, aFace } from './a-check.ts';

describe('deviations as they are drawn', () => {
	it('shift a face along its outward normal, a level up or down, a mark in plan', () => {
		const marks = marksOf([
			aFace({ checkpointId: 'face', elementId: 'e', deviationMm: -16, direction: [0, -1, 0] }),
			aFace({ checkpointId: 'level', elementId: 'e', deviationMm: 12, characteristic: 'level', direction: null }),
			aFace({ checkpointId: 'plan', elementId: 'e', deviationMm: 5, characteristic: 'plan', direction: null, offsetMm: [3, -4] }),
			aFace({ checkpointId: 'none', elementId: 'e', deviationMm: null }),
		]);
		const shift = (id: string) => marks.find((mark) => mark.checkpointId === id)?.shiftM?.map((part) => Math.round(part * 1e6) / 1e6 + 0);
		expect(shift('face')).toEqual([0, 0.016, 0]);
		expect(shift('level')).toEqual([0, 0, 0.012]);
		expect(shift('plan')).toEqual([0.003, -0.004, 0]);
		expect(shift('none')).toBeUndefined();
	});

	it('draws what is off last, and lines only for what is off or too close', () => {
		const marks = marksOf(aCheck().deviations);
		expect(marks.map(({ kind }) => kind)).toEqual(['none', 'within', 'within', 'close', 'shy', 'proud']);
		expect(marks.filter(hasLine).map(({ kind }) => kind)).toEqual(['close', 'shy', 'proud']);
	});

	it('states an exaggeration that is a round number and makes no line longer than the work is wide', () => {
		const marks = marksOf(aCheck().deviations);
		expect(exaggerationOf(marks, 30)).toBe(100);
		fc.assert(
			fc.property(fc.double({ min: 0.5, max: 500, noNaN: true }), fc.double({ min: 0.5, max: 400, noNaN: true }), (sizeM, deviationMm) => {
				const times = exaggerationOf(marksOf([aFace({ checkpointId: 'a', elementId: 'e', deviationMm: deviationMm + 14 })]), sizeM);
				expect([1, 2, 5, 10, 20, 50, 100, 200, 500, 1000]).toContain(times);
				expect(times === 1 || (times * (deviationMm + 14)) / 1000 <= sizeM / 10).toBe(true);
			}),
		);
	});

	it('finds the mark nearest to a press as the plain search does, and none out of reach', () => {
		const places = fc.array(fc.tuple(fc.integer({ min: 0, max: 300 }), fc.integer({ min: 0, max: 300 })), { maxLength: 60 });
		fc.assert(
			fc.property(places, fc.integer({ min: 0, max: 300 }), fc.integer({ min: 0, max: 300 }), (points, x, y) => {
				const found = nearestMark(points.flat(), x, y, 14);
				const distances = points.map(([px, py]) => Math.hypot(px - x, py - y));
				const least = Math.min(...distances);
				if (least > 14) expect(found).toBeNull();
				else expect(found).toBe(distances.lastIndexOf(least));
			}),
		);
	});
});
