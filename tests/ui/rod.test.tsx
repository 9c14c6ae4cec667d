/** @vitest-environment jsdom */
import { render } from '@testing-library/react';
import fc from 'fast-check';
import type { ComponentProps } from 'react';
import { describe, expect, it } from 'vitest';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';
import { shareOfLimits, tickLayers, WideRod, type WideRodTick } from '#src/ui/wide-rod.tsx';

const aRod = (over: Partial<ComponentProps<typeof Rod>> = {}) => (
	<Rod
		deviationMm={16}
		limitsMm={[-10, 10]}
		expandedUncertaintyMm={3}
		scaleMm={30}
		glyph="proud"
		sentence="East face: 16 mm proud."
		{...over}
	/>
);
const glyphX = (container: HTMLElement) =>
	Number(/translate\(([-\d.]+)/.exec(container.querySelector('g')?.getAttribute('transform') ?? '')?.[1]);
/** From and to of the horizontal piece a class draws. */
const reach = (container: HTMLElement, selector: string) =>
	/^M([-\d.]+) [-\d.]+H([-\d.]+)$/
		.exec(container.querySelector(selector)?.getAttribute('d') ?? '')
		?.slice(1)
		.map(Number);

describe('the rod', () => {
	it('is named by its sentence', () => {
		expect(render(aRod()).getByRole('img', { name: 'East face: 16 mm proud.' })).toBeTruthy();
	});

	it('stands where the drawing has it: +16 of ±30 on 176 px, with its whisker', () => {
		const { container } = render(aRod());
		expect(glyphX(container)).toBeCloseTo(130.13, 2);
		expect(reach(container, '.whisker')).toEqual([122.23, 138.03]);
	});

	it('puts a value past the end at the end, and keeps its order inside', () => {
		const at = (deviationMm: number) => glyphX(render(aRod({ deviationMm })).container);
		expect(at(900)).toBe(at(30));
		expect(at(-900)).toBe(at(-30));
		fc.assert(
			fc.property(fc.integer({ min: -30, max: 29 }), (value) => {
				expect(at(value)).toBeLessThan(at(value + 1));
			}),
			{ numRuns: 20 },
		);
	});

	it('draws one notch for each limit, and in plan only the outer one', () => {
		const notches = (element: ReturnType<typeof aRod>) => render(element).container.querySelectorAll('path.stroke-ink').length;
		expect(notches(aRod())).toBe(2);
		expect(notches(aRod({ limitsMm: [null, 10] }))).toBe(1);
		expect(notches(aRod({ limitsMm: [null, 10], isPlan: true, glyph: 'plan' }))).toBe(1);
		expect(notches(aRod({ limitsMm: null, glyph: 'none' }))).toBe(0);
	});

	it('shows what was not measured in the middle, without a whisker', () => {
		const { container } = render(aRod({ deviationMm: null, expandedUncertaintyMm: null, glyph: 'none' }));
		expect(glyphX(container)).toBe(88);
		expect(container.querySelector('.whisker')).toBeNull();
	});

	it('takes one scale for a table that no gross value can spoil', () => {
		const limits = Array.from({ length: 100 }, () => [-10, 10] as const);
		const values = limits.map((_, index) => (index % 7) - 3);
		expect(rodScaleMm(limits, values)).toBe(15);
		expect(rodScaleMm(limits, [...values, 4000])).toBe(15);
		expect(rodScaleMm([], [])).toBeGreaterThan(0);
	});
});

describe('the wide rod', () => {
	it('scales every deviation to its own limits', () => {
		expect(shareOfLimits({ deviationMm: 10, limitsMm: [-10, 10], isPlan: false })).toBe(1);
		expect(shareOfLimits({ deviationMm: -5, limitsMm: [-5, 15], isPlan: false })).toBe(-1);
		expect(shareOfLimits({ deviationMm: 6, limitsMm: [null, 12], isPlan: true })).toBe(0.5);
		expect(shareOfLimits({ deviationMm: -4, limitsMm: [-8, null], isPlan: false })).toBe(-0.5);
		// Tenths of a millimetre: what a limit or a deviation is written in.
		const tenths = (min: number, max: number) => fc.integer({ min: min * 10, max: max * 10 }).map((value) => value / 10);
		fc.assert(
			fc.property(tenths(-50, 0), tenths(1, 50), tenths(-200, 200), (lower, upper, value) => {
				const share = shareOfLimits({ deviationMm: value, limitsMm: [lower, upper], isPlan: false });
				if (value < lower) expect(share).toBeLessThan(-1);
				else if (value > upper) expect(share).toBeGreaterThan(1);
				else expect(Math.abs(share)).toBeLessThanOrEqual(1 + 1e-9);
			}),
		);
	});

	it('draws 5 000 deviations with a handful of elements', () => {
		const ticks: WideRodTick[] = Array.from({ length: 5000 }, (_, index) => ({
			id: String(index),
			glyph: index % 50 === 0 ? 'proud' : 'within',
			deviationMm: (index % 21) - 10,
			limitsMm: [-10, 10],
			isPlan: false,
		}));
		expect(render(<WideRod ticks={ticks} summary="all" />).container.querySelectorAll('*').length).toBeLessThan(40);
	});

	it('shows every tick, and a column the darker the more lie on it', () => {
		fc.assert(
			fc.property(fc.array(fc.integer({ min: 0, max: 30 }), { minLength: 1, maxLength: 400 }), (xs) => {
				const layers = tickLayers(xs);
				const darkness = (x: number) => layers.filter((layer) => layer.path.includes(`M${x}.5 `)).length;
				const count = (x: number) => xs.filter((one) => one === x).length;
				expect(layers.length).toBeLessThanOrEqual(6);
				for (const x of new Set(xs)) {
					expect(darkness(x)).toBeGreaterThan(0);
					for (const other of new Set(xs)) if (count(x) > count(other)) expect(darkness(x)).toBeGreaterThanOrEqual(darkness(other));
				}
			}),
			{ numRuns: 30 },
		);
		expect(tickLayers([])).toEqual([]);
	});
});
