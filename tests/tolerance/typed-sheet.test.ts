import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { evaluateLimits } from '#shared/tolerance/limit.ts';
import { publishedExtracts } from '#shared/tolerance/published-extracts.ts';
import type { Limit, ToleranceRule } from '#shared/tolerance/sheet-schema.ts';
import { starterSheet } from '#shared/tolerance/starter-sheet.ts';
import { newRule, sheetAsTyped, sheetForm, type TypedSheet } from '#src/features/tolerance/typed-sheet.ts';

const size = fc.constantFrom('height' as const, 'length' as const, 'thickness' as const);
const over = fc.tuple(size, fc.integer({ min: 1, max: 1000 })).map(([of, n]) => ({ [`${of}Over`]: n }) as { heightOver: number });
const term = fc.oneof(fc.integer({ min: 1, max: 60 }), over);
const cap = fc.option(
	fc.integer({ min: 1, max: 60 }).map((atMost) => ({ atMost })),
	{ nil: {} },
);
const positive = fc.oneof(
	term,
	fc.tuple(term, term, cap).map(([a, b, most]) => ({ greaterOf: [a, b] as [typeof a, typeof b], ...most })),
	fc.tuple(term, term, cap).map(([a, b, most]) => ({ lesserOf: [a, b] as [typeof a, typeof b], ...most })),
	fc
		.tuple(size, fc.uniqueArray(fc.integer({ min: 1, max: 9000 }), { minLength: 2, maxLength: 5 }))
		.map(([of, sizes]) => ({ of, between: sizes.map((at, index): [number, number] => [at, 5 + index]) })),
);
const rule = fc
	.record({
		lower: fc.option(positive),
		upper: positive,
		isBox: fc.boolean(),
		what: fc.constantFrom('plan' as const, 'level' as const, undefined),
	})
	.map(
		({ lower, upper, isBox, what }): ToleranceRule => ({
			id: 'r',
			match: what === undefined ? {} : { characteristic: what },
			lowerMm: lower === null ? null : ({ minus: lower } as Limit),
			upperMm: upper,
			...(isBox && { shape: 'box' as const, axes: 'grid' as const }),
		}),
	);

const faultsOf = (typed: TypedSheet): string[] => sheetForm.safeParse(typed).error?.issues.map(({ path }) => path.join('.')) ?? [];
const typedWith = (change: (rule: TypedSheet['rules'][number]) => void): TypedSheet => {
	const rule = newRule([]);
	rule.upper.first.value = 10;
	change(rule);
	return { name: 'S', decision: 'guarded', rules: [rule] };
};

describe('a sheet in its form', () => {
	it('comes out with the limits it went in with, whatever its rules say', () => {
		fc.assert(
			fc.property(
				rule,
				fc.tuple(...[0, 1, 2].map(() => fc.double({ min: 0.05, max: 40, noNaN: true }))),
				(given, [length, height, thickness]) => {
					const sheet = { name: 'S', decision: 'simple' as const, rules: [given] };
					const [back] = sheetForm.parse(sheetAsTyped(sheet)).rules;
					const sizesM = { length: length!, height: height!, thickness: thickness! };
					for (const isPlan of given.match.characteristic === undefined ? [true, false] : [given.match.characteristic === 'plan'])
						expect(evaluateLimits(back!, sizesM, isPlan)).toEqual(evaluateLimits(given, sizesM, isPlan));
					expect(back!.match).toEqual(given.match);
				},
			),
		);
	});
	it('keeps all that the shipped rules say', () => {
		const rules = [...starterSheet.rules, ...publishedExtracts.flatMap((extract) => extract.rules.map((one) => one.rule))];
		const back = sheetForm.parse(sheetAsTyped({ ...starterSheet, rules })).rules;
		for (const [index, one] of rules.entries()) expect(back[index]).toMatchObject(one);
	});
	it('says each fault at its field', () => {
		expect(faultsOf(typedWith(() => {}))).toEqual([]);
		expect(
			faultsOf(
				typedWith((one) => {
					one.isSame = false;
					one.lower.kind = 'term';
					one.lower.first.value = 12;
				}),
			),
		).toEqual(['rules.0.lower.first.value']);
		expect(faultsOf(typedWith((one) => void Object.assign(one.upper.first, { value: Number.NaN })))).toContain('rules.0.upper.first.value');
		expect(faultsOf(typedWith((one) => void Object.assign(one.upper.first, { value: -4 })))).toEqual(['rules.0.upper.first.value']);
		expect(faultsOf(typedWith((one) => void Object.assign(one.upper, { kind: 'none' })))).toEqual(['rules.0.upper.kind']);
		expect(faultsOf(typedWith((one) => void Object.assign(one, { hasSizeBand: true, sizeOverMm: 300, sizeToMm: 300 })))).toEqual([
			'rules.0.sizeToMm',
		]);
		expect(faultsOf(typedWith((one) => void Object.assign(one, { characteristic: 'flatness' })))).toEqual(['rules.0.straightedgeM']);
		expect(faultsOf(typedWith((one) => void Object.assign(one.upper, { first: { of: 'height', value: 0 } })))).toEqual([
			'rules.0.upper.first.value',
		]);
		const twice = typedWith((one) => {
			one.upper.kind = 'between';
			one.upper.points = [1, 1].map((limitMm) => ({ sizeMm: 400, limitMm }));
		});
		expect(faultsOf(twice)).toEqual(['rules.0.upper.points.1.sizeMm']);
	});
	it('asks nothing of fields that are not in use', () => {
		const typed = typedWith((one) => {
			one.lower.kind = 'greater';
			one.lower.first.value = Number.NaN;
			one.sizeToMm = Number.NaN;
			one.straightedgeM = Number.NaN;
		});
		expect(sheetForm.parse(typed).rules[0]).toEqual({
			id: 'rule-1',
			match: {},
			lowerMm: -10,
			upperMm: 10,
			shape: 'disc',
		});
	});
});
