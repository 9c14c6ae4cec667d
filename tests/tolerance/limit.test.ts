import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { evaluateLimit, evaluateLimits } from '#shared/tolerance/limit.ts';
import { matchRule, type RuleSubject } from '#shared/tolerance/match-rule.ts';
import { type Limit, limit as limitSchema, type ToleranceRule, toleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { starterSheet } from '#shared/tolerance/starter-sheet.ts';

const sizes = (over: Partial<Record<'length' | 'height' | 'thickness', number>> = {}) => ({
	length: null,
	height: null,
	thickness: null,
	...over,
});
const mm = (limit: Limit, over: Parameters<typeof sizes>[0] = {}) => {
	const got = evaluateLimit(limitSchema.parse(limit), sizes(over));
	return 'limitMm' in got ? got.limitMm : got.missingSize;
};

describe('limits of published rules', () => {
	// EN 13670:2009, class 1, section: ±10 at 150 mm, ±15 at 400 mm, ±30 at 2500 mm, straight between.
	const section: Limit = {
		between: [
			[150, 10],
			[400, 15],
			[2500, 30],
		],
		of: 'thickness',
	};
	it.each([
		[0.05, 10],
		[0.15, 10],
		[0.275, 12.5],
		[0.4, 15],
		[1.45, 22.5],
		[2.5, 30],
		[4, 30],
	])('section of %d m: %d mm', (thickness, want) => {
		expect(mm(section, { thickness })).toBeCloseTo(want, 12);
		expect(mm({ minus: section }, { thickness })).toBeCloseTo(-want, 12);
	});
	// EN 13670:2009 figure 2 a: the greater of 15 mm and h/400. ACI 117-90 4.1: the lesser of 6 in. and h/1000. Figure 2 b: t/30, 15 to 30.
	it.each<[Limit, number, number | string]>([
		[{ greaterOf: [15, { heightOver: 400 }] }, 4, 15],
		[{ greaterOf: [15, { heightOver: 400 }] }, 8, 20],
		[{ lesserOf: [152.4, { heightOver: 1000 }] }, 60, 60],
		[{ lesserOf: [152.4, { heightOver: 1000 }] }, 300, 152.4],
		[{ greaterOf: [15, { heightOver: 30 }], atMost: 30 }, 0.6, 20],
		[{ greaterOf: [15, { heightOver: 30 }], atMost: 30 }, 3, 30],
		[{ minus: { greaterOf: [15, { heightOver: 400 }] } }, 8, -20],
		[{ greaterOf: [{ heightOver: 500 }, { heightOver: 250 }] }, 3, 12],
	])('%j for a height of %d m', (limit, height, want) => {
		expect(mm(limit, { height })).toBeCloseTo(want as number, 12);
	});
	// Limits of EN 13670:2009, ACI 117 and AISC 303-16 for heights in millimetres, worked out by hand from their formulas.
	it.each<[Limit, number, number]>([
		[{ greaterOf: [15, { heightOver: 400 }] }, 3000, 15],
		[{ greaterOf: [15, { heightOver: 400 }] }, 6000, 15],
		[{ greaterOf: [15, { heightOver: 400 }] }, 8000, 20],
		[{ greaterOf: [25, { heightOver: 600 }] }, 12000, 25],
		[{ greaterOf: [25, { heightOver: 600 }] }, 30000, 50],
		[{ greaterOf: [15, { heightOver: 300 }], atMost: 30 }, 4800, 16],
		[{ greaterOf: [15, { heightOver: 300 }], atMost: 30 }, 20000, 30],
		[{ lesserOf: [25.4, { heightOver: 333.3333333333333 }] }, 3000, 9],
		[{ lesserOf: [25.4, { heightOver: 333.3333333333333 }] }, 12000, 25.4],
		[{ lesserOf: [152.39999999999998, { heightOver: 1000 }] }, 60000, 60],
		[{ lesserOf: [152.39999999999998, { heightOver: 1000 }] }, 300000, 152.4],
		[{ heightOver: 500 }, 3658, 7.316],
		[12, 5000, 12],
		[{ lesserOf: [10, { heightOver: 500 }], atMost: 8 }, 20000, 8],
		[{ greaterOf: [10, { heightOver: 500 }], atMost: 30 }, 20000, 30],
		[{ greaterOf: [10, { heightOver: 500 }], atMost: 30 }, 5000, 10],
		[{ greaterOf: [10, { heightOver: 500 }], atMost: 30 }, 9000, 18],
	])('%j at %d mm: %d mm', (limit, heightMm, want) => {
		expect(mm(limit, { height: heightMm / 1000 })).toBeCloseTo(want, 9);
	});
	it('says which size is missing instead of guessing', () => {
		expect(mm(section)).toBe('thickness');
		expect(mm({ minus: { greaterOf: [15, { lengthOver: 400 }] } }, { height: 3 })).toBe('length');
		expect(mm({ lesserOf: [{ thicknessOver: 10 }, 3] })).toBe('thickness');
	});
	it('keeps plain and absent limits', () => {
		expect(mm(null)).toBeNull();
		expect(mm(0)).toBe(0);
		expect(Object.is(mm({ minus: 0 }), 0)).toBe(true);
		expect(mm({ minus: 6.5 })).toBe(-6.5);
	});
	it('lies between its neighbours and never falls on a rising rule', () => {
		fc.assert(
			fc.property(fc.double({ min: 0, max: 5, noNaN: true }), fc.double({ min: 0, max: 0.5, noNaN: true }), (thickness, more) => {
				const [low, high] = [mm(section, { thickness }) as number, mm(section, { thickness: thickness + more }) as number];
				expect(low).toBeGreaterThanOrEqual(10);
				expect(high).toBeLessThanOrEqual(30);
				expect(high).toBeGreaterThanOrEqual(low - 1e-9);
			}),
		);
	});
});

const rule = (over: Partial<ToleranceRule> & { id: string }): ToleranceRule => ({ match: {}, lowerMm: -10, upperMm: 10, ...over });

describe('both sides', () => {
	it('has a radius alone in plan, two sides in a box', () => {
		expect(evaluateLimits(rule({ id: 'a' }), sizes(), true)).toEqual({ limitsMm: [null, 10] });
		expect(evaluateLimits(rule({ id: 'a', shape: 'box' }), sizes(), true)).toEqual({ limitsMm: [-10, 10] });
		expect(evaluateLimits(rule({ id: 'a', upperMm: null }), sizes(), false)).toEqual({ limitsMm: [-10, null] });
	});
	it('refuses limits that cross', () => {
		expect(evaluateLimits(rule({ id: 'a', lowerMm: 5, upperMm: -5 }), sizes(), false)).toEqual({ crossed: [5, -5] });
		expect(evaluateLimits(rule({ id: 'a', upperMm: -5 }), sizes(), true)).toEqual({ crossed: [null, -5] });
	});
});

describe('the first rule that fits', () => {
	const subject: RuleSubject = {
		class: 'IfcColumn',
		characteristic: 'face',
		storey: 'Ground',
		building: 'A',
		tag: 'C1',
		mark: 'C3-G',
		stage: 'as-cast',
		sizesM: { length: null, height: 3, thickness: 0.4 },
	};
	const first = (matches: ToleranceRule['match'][], over: Partial<RuleSubject> = {}) =>
		matchRule(
			matches.map((match, index) => rule({ id: String(index), match })),
			{ ...subject, ...over },
		).rule?.id ?? null;
	it('takes them in order', () => {
		expect(first([{ class: 'IfcWall' }, { class: 'IfcColumn', characteristic: 'face' }, {}])).toBe('1');
		expect(first([{}, { class: 'IfcColumn' }])).toBe('0');
		expect(first([{ class: 'IfcWall' }])).toBeNull();
	});
	it('minds neither case nor blanks of names, and knows no wildcards', () => {
		expect(first([{ class: 'IFCCOLUMN', storey: ' ground ', tag: 'c1', mark: 'c3-g', building: 'a' }])).toBe('0');
		expect(first([{ mark: 'C3*' }, { mark: 'C3' }])).toBeNull();
	});
	it('holds stage and exposure against what is known', () => {
		expect(first([{ stage: 'before-pour' }, { stage: 'as-cast' }])).toBe('1');
		expect(first([{ exposed: false }, { exposed: true }])).toBeNull();
		expect(first([{ exposed: false }, { exposed: true }], { exposed: true })).toBe('1');
	});
	it('takes a band over its first and up to its second size', () => {
		const bands: ToleranceRule['match'][] = [
			{ sizeMm: [0, 1000], of: 'height' },
			{ sizeMm: [1000, 3000], of: 'height' },
			{ sizeMm: [3000, 6000], of: 'height' },
		];
		expect(first(bands)).toBe('1');
		expect(first(bands, { sizesM: { length: null, height: 1.00000001, thickness: null } })).toBe('1');
		// What a unit conversion leaves behind does not move it to the next band.
		expect(first(bands, { sizesM: { length: null, height: 3 + 4e-16, thickness: null } })).toBe('1');
		expect(first(bands, { sizesM: { length: null, height: 3.001, thickness: null } })).toBe('2');
	});
	it('names the rules it could not try for want of a size', () => {
		const got = matchRule([rule({ id: 'a', match: { sizeMm: [0, 500], of: 'length' } }), rule({ id: 'b' })], subject);
		expect(got.rule?.id).toBe('b');
		expect(got.withoutSize.map(({ id }) => id)).toEqual(['a']);
	});
});

describe('the starting points', () => {
	it('are a valid sheet, each rule with its source and edition', () => {
		expect(toleranceSheet.parse(starterSheet)).toEqual(starterSheet);
		expect(new Set(starterSheet.rules.map(({ id }) => id)).size).toBe(starterSheet.rules.length);
		for (const { source, clause, edition } of starterSheet.rules)
			expect([source, clause, edition].every((text) => text !== undefined && text.length > 0)).toBe(true);
	});
	// DIN 18202:2013-04, table 1, and UFGS 03700 in inches.
	it('hold the published figures', () => {
		const limits = Object.fromEntries(starterSheet.rules.map(({ id, lowerMm, upperMm }) => [id, [lowerMm, upperMm]]));
		expect(limits).toEqual({
			'bolts-plan': [null, 25.4 / 4],
			'slab-level-shored': [-0.75 * 25.4, 0.75 * 25.4].map((x) => expect.closeTo(x, 9)),
			levels: [-16, 16],
			plan: [null, 20],
			faces: [-25.4, 25.4],
		});
	});
});
