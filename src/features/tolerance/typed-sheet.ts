import { z } from 'zod';
import {
	characteristics,
	derivedCharacteristics,
	type Limit,
	type RuleMatch,
	stages,
	type ToleranceRule,
	type ToleranceSheet,
	toleranceRule,
	toleranceSheet,
} from '#shared/tolerance/sheet-schema.ts';
import { emptyLimit, limitAsTyped, limitOfTyped, numberIn, type SayFault, turnedLimit, typedLimit, typedNumber } from './typed-limit.ts';

const anyOr = <const Values extends readonly string[]>(values: Values) => z.enum(['', ...values]);
const text = (longest: number) => z.string().max(longest, `At most ${longest} characters.`);

/** A rule as it stands in the fields; empty words are left out of the rule. */
const typedRule = z.object({
	id: toleranceRule.shape.id,
	class: text(100),
	characteristic: anyOr([...characteristics, ...derivedCharacteristics]),
	storey: text(200),
	building: text(200),
	mark: text(100),
	tag: text(100),
	stage: anyOr(stages),
	exposed: z.enum(['', 'yes', 'no']),
	hasSizeBand: z.boolean(),
	sizeOf: z.enum(['length', 'height', 'thickness']),
	sizeOverMm: typedNumber,
	sizeToMm: typedNumber,
	reference: anyOr(['frame', 'grid', 'below', 'group', 'best-fit'] as const),
	shape: z.enum(['disc', 'box']),
	axes: z.enum(['grid', 'element']),
	/** The lower side is the upper one turned round. */
	isSame: z.boolean(),
	lower: typedLimit,
	upper: typedLimit,
	straightedgeM: typedNumber,
	source: text(500),
	clause: text(200),
	edition: text(100),
});
export type TypedRule = z.infer<typeof typedRule>;

const typedSheet = z.object({
	name: z.string().trim().min(1, 'Give the sheet a name.').max(120, 'At most 120 characters.'),
	decision: toleranceSheet.shape.decision,
	rules: z.array(typedRule).max(500, 'At most 500 rules.'),
});
export type TypedSheet = z.infer<typeof typedSheet>;

/** What the form of a sheet holds, checked and read as the sheet that is stored. Every fault stands at its field. */
export const sheetForm = typedSheet
	.transform(({ rules, ...head }, context): ToleranceSheet => {
		const read = rules.map((rule, index) =>
			ruleOfTyped(rule, (path, message) =>
				context.issues.push({ code: 'custom', message, path: ['rules', index, ...path], input: rule, continue: true }),
			),
		);
		return { ...head, rules: read };
	})
	.pipe(toleranceSheet);

/** In plan a circle has its radius alone, flatness the gap alone: there is no lower side to set. */
export function hasLowerSide({ characteristic, shape }: Pick<TypedRule, 'characteristic' | 'shape'>): boolean {
	return !(characteristic === 'plan' && shape === 'disc') && characteristic !== 'flatness' && characteristic !== 'flatness-best-fit';
}

/** A typed rule as it would be stored; faults are said at their fields. */
export function ruleOfTyped(typed: TypedRule, sayFault: SayFault): ToleranceRule {
	const upperMm = limitOfTyped(typed.upper, within('upper', sayFault));
	const lowerMm = !hasLowerSide(typed) ? null : typed.isSame ? turnedLimit(upperMm) : limitOfTyped(typed.lower, within('lower', sayFault));
	if (typeof lowerMm === 'number' && typeof upperMm === 'number' && lowerMm > upperMm)
		sayFault(
			typed.isSame ? ['upper', 'first', 'value'] : ['lower', 'first', 'value'],
			typed.isSame ? 'The same both ways takes a number over 0.' : 'The lower limit is above the upper one.',
		);
	if (!hasLowerSide(typed) && typeof upperMm === 'number' && upperMm < 0)
		sayFault(['upper', 'first', 'value'], 'Such a limit is not below 0.');
	if (lowerMm === null && upperMm === null) sayFault(['upper', 'kind'], 'Set a limit on one side at least.');
	const { characteristic, shape, axes, reference, straightedgeM } = typed;
	const mayBePlan = characteristic === 'plan' || characteristic === '';
	return {
		id: typed.id,
		match: matchOf(typed, sayFault),
		lowerMm,
		upperMm,
		...(mayBePlan && { shape }),
		...(mayBePlan && shape === 'box' && { axes }),
		...(reference !== '' && { reference }),
		...(characteristic === 'flatness' && { straightedgeM: numberIn(straightedgeM, ['straightedgeM'], sayFault, true) || 1 }),
		...named(typed, ['source', 'clause', 'edition']),
	};
}

function matchOf(typed: TypedRule, sayFault: SayFault): RuleMatch {
	const { characteristic, stage, exposed } = typed;
	return {
		...named(typed, ['class', 'storey', 'building', 'tag', 'mark']),
		...(characteristic !== '' && { characteristic }),
		...(stage !== '' && { stage }),
		...(exposed !== '' && { exposed: exposed === 'yes' }),
		...(typed.hasSizeBand && { sizeMm: bandOf(typed, sayFault), of: typed.sizeOf }),
	};
}

function bandOf({ sizeOverMm, sizeToMm }: TypedRule, sayFault: SayFault): [number, number] {
	const over = sizeOverMm === null ? 0 : numberIn(sizeOverMm, ['sizeOverMm'], sayFault);
	const to = numberIn(sizeToMm, ['sizeToMm'], sayFault);
	if (Number.isFinite(sizeToMm) && to <= over) sayFault(['sizeToMm'], 'The band ends before it begins.');
	return [over, to];
}

function named<Name extends string>(typed: Readonly<Record<Name, string>>, names: readonly Name[]): Partial<Record<Name, string>> {
	const said: Partial<Record<Name, string>> = {};
	for (const name of names) {
		const word = typed[name].trim();
		if (word !== '') said[name] = word;
	}
	return said;
}

function within(name: string, sayFault: SayFault): SayFault {
	return (path, message) => sayFault([name, ...path], message);
}

/** A sheet as it stands in the fields. */
export function sheetAsTyped({ name, decision, rules }: ToleranceSheet): TypedSheet {
	return { name, decision, rules: rules.map(ruleAsTyped) };
}

/** A rule as it stands in the fields. */
export function ruleAsTyped({ id, match, lowerMm, upperMm, ...rule }: ToleranceRule): TypedRule {
	const isSame = isMirrored(lowerMm, upperMm);
	return {
		id,
		class: match.class ?? '',
		characteristic: match.characteristic ?? '',
		storey: match.storey ?? '',
		building: match.building ?? '',
		mark: match.mark ?? '',
		tag: match.tag ?? '',
		stage: match.stage ?? '',
		exposed: match.exposed === undefined ? '' : match.exposed ? 'yes' : 'no',
		hasSizeBand: match.sizeMm !== undefined,
		sizeOf: match.of ?? 'length',
		sizeOverMm: match.sizeMm?.[0] ?? null,
		sizeToMm: match.sizeMm?.[1] ?? null,
		reference: rule.reference ?? '',
		shape: rule.shape ?? 'disc',
		axes: rule.axes ?? 'grid',
		isSame,
		lower: limitAsTyped(lowerMm, true),
		upper: limitAsTyped(upperMm, false),
		straightedgeM: rule.straightedgeM ?? null,
		source: rule.source ?? '',
		clause: rule.clause ?? '',
		edition: rule.edition ?? '',
	};
}

function isMirrored(lowerMm: Limit, upperMm: Limit): boolean {
	return lowerMm !== null && upperMm !== null && JSON.stringify(turnedLimit(upperMm)) === JSON.stringify(lowerMm);
}

/** A rule to begin with, for elements of a class and what is measured of them; `taken` are the ids of the sheet's rules. */
export function newRule(taken: readonly string[], about: Partial<Pick<TypedRule, 'class' | 'characteristic'>> = {}): TypedRule {
	const blank = ruleAsTyped({ id: freeRuleId(taken), match: {}, lowerMm: null, upperMm: null });
	const upper = { ...emptyLimit(false), kind: 'term' as const };
	return { ...blank, ...about, isSame: true, upper };
}

/** "rule-7": an id that no rule of the sheet has. */
export function freeRuleId(taken: readonly string[]): string {
	let number = taken.length + 1;
	while (taken.includes(`rule-${number}`)) number += 1;
	return `rule-${number}`;
}
