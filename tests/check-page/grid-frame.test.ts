import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drawnAxes, frameAnchors, levelText, withBubbles } from '#src/features/model/grid-frame.ts';
import { clearAnchors, type StageAnchor } from '#src/ui/stage-anchor.ts';

const box = { min: [500, 1200, 30], max: [530, 1220, 40] } as const;
const axis = (tag: string, points: [number, number][], direction: 'u' | 'v' = 'u') => ({ tag, direction, points });

describe('the grid as it is drawn', () => {
	it('cuts an axis to the work and puts its bubble beyond the southern end', () => {
		const [drawn] = drawnAxes(
			[
				axis('A', [
					[505, 9000],
					[505, -9000],
				]),
			],
			box,
		);
		expect(drawn?.from[1]).toBeLessThan(1200);
		expect(drawn?.from[1]).toBeGreaterThan(1190);
		expect(drawn?.bubble[1]).toBeLessThan(drawn?.from[1] ?? 0);
		expect(drawn?.to[1]).toBeGreaterThan(1220);
		expect(drawn?.bubble[0]).toBeCloseTo(505, 9);
	});

	it('leaves out an axis that misses the work, has no length or comes twice', () => {
		const axes = drawnAxes(
			[
				axis('A', [
					[505, 1190],
					[505, 1230],
				]),
				axis('A', [
					[505, 1190],
					[505, 1230],
				]),
				axis('Z', [
					[900, 0],
					[900, 10],
				]),
				axis('P', [
					[510, 1210],
					[510, 1210],
				]),
			],
			box,
		);
		expect(axes.map(({ tag }) => tag)).toEqual(['A']);
	});

	it('keeps every drawn axis on its own line and within the work and its margin', () => {
		const plan = fc.tuple(fc.double({ min: 300, max: 700, noNaN: true }), fc.double({ min: 1000, max: 1400, noNaN: true }));
		fc.assert(
			fc.property(plan, plan, (from, to) => {
				fc.pre(Math.hypot(to[0] - from[0], to[1] - from[1]) > 1);
				for (const drawn of drawnAxes([axis('A', [from, to])], box)) {
					for (const [east, north] of [drawn.from, drawn.to]) {
						const across = (to[0] - from[0]) * (north - from[1]) - (to[1] - from[1]) * (east - from[0]);
						expect(Math.abs(across) / Math.hypot(to[0] - from[0], to[1] - from[1])).toBeLessThan(1e-6);
						expect(east).toBeGreaterThan(500 - 1.36);
						expect(east).toBeLessThan(530 + 1.36);
						expect(north).toBeGreaterThan(1200 - 1.36);
						expect(north).toBeLessThan(1220 + 1.36);
					}
				}
			}),
		);
	});

	it('takes the bubbles into the whole, hangs levels that touch the work, and says heights with their sign', () => {
		const axes = drawnAxes(
			[
				axis(
					'1',
					[
						[400, 1205],
						[600, 1205],
					],
					'v',
				),
			],
			box,
		);
		expect(withBubbles(box, axes).min[0]).toBeLessThan(499);
		const anchors = frameAnchors(
			axes,
			[
				{ name: 'Ground', elevationM: 30 },
				{ name: 'Roof', elevationM: 90 },
				{ name: 'None', elevationM: null },
			],
			box,
			[500, 1200, 30],
		);
		expect(anchors.map(({ text }) => text)).toEqual(['1', '+30.000 Ground']);
		expect(anchors[1]?.place[2]).toBe(0);
		expect([levelText(-1.2), levelText(0), levelText(-0.0001)]).toEqual(['−1.200', '±0.000', '±0.000']);
	});

	it('lets an earlier bubble hide a later one that would lie on it, never across kinds', () => {
		const bubble = (text: string): StageAnchor => ({ key: text, kind: 'bubble', place: [0, 0, 0], text });
		const ring: StageAnchor = { key: 'r', kind: 'ring', place: [0, 0, 0], text: '' };
		expect(
			clearAnchors(
				[bubble('A'), bubble('B'), bubble('C'), ring],
				[
					[0, 0],
					[10, 0],
					[30, 0],
					[0, 0],
				],
			),
		).toEqual([true, false, true, true]);
	});
});
