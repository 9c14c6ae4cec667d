import { z } from 'zod';

/** A tolerance sheet as the command line reads it: ordered rules, the first that fits decides. Millimetres. */

export const characteristics = ['plan', 'level', 'face'] as const;
export const characteristic = z.enum(characteristics);
export type Characteristic = z.infer<typeof characteristic>;
export const derivedCharacteristics = [
	'plumb',
	'section',
	'flatness',
	'flatness-best-fit',
	'bolt-distance',
	'group-shift',
	'group-turn',
	'projection',
] as const;
export type DerivedCharacteristic = (typeof derivedCharacteristics)[number];

export const stages = ['before-pour', 'as-cast-shored', 'as-cast', 'later'] as const;
export const stage = z.enum(stages);
export type Stage = z.infer<typeof stage>;

const sizeOf = z.enum(['length', 'height', 'thickness']);
const term = z.union([
	z.number(),
	z.strictObject({ heightOver: z.number().positive() }),
	z.strictObject({ thicknessOver: z.number().positive() }),
	z.strictObject({ lengthOver: z.number().positive() }),
]);
export type LimitTerm = z.infer<typeof term>;
const twoTerms = z.tuple([term, term]);
const positiveLimit = z.union([
	...term.options,
	z.strictObject({
		between: z.array(z.tuple([z.number(), z.number()])).min(2),
		of: sizeOf,
	}),
	z.strictObject({ greaterOf: twoTerms, atMost: z.number().optional() }),
	z.strictObject({ lesserOf: twoTerms, atMost: z.number().optional() }),
]);
/** null: no limit on that side. `minus` turns a limit round for the lower side. */
export const limit = z.union([z.null(), positiveLimit, z.strictObject({ minus: positiveLimit })]);
export type Limit = z.infer<typeof limit>;

export const ruleMatch = z.strictObject({
	class: z.string().optional(),
	characteristic: z.enum([...characteristics, ...derivedCharacteristics]).optional(),
	storey: z.string().optional(),
	building: z.string().optional(),
	tag: z.string().optional(),
	mark: z.string().optional(),
	stage: stage.optional(),
	exposed: z.boolean().optional(),
	/** Over the first, up to and with the second, mm. */
	sizeMm: z.tuple([z.number(), z.number()]).optional(),
	of: sizeOf.optional(),
});
export type RuleMatch = z.infer<typeof ruleMatch>;

export const toleranceRule = z.strictObject({
	id: z.string().min(1).max(60),
	match: ruleMatch,
	lowerMm: limit,
	upperMm: limit,
	shape: z.enum(['disc', 'box']).optional(),
	axes: z.enum(['grid', 'element']).optional(),
	reference: z.enum(['frame', 'grid', 'below', 'group', 'best-fit']).optional(),
	straightedgeM: z.number().positive().optional(),
	source: z.string().optional(),
	clause: z.string().optional(),
	edition: z.string().optional(),
});
export type ToleranceRule = z.infer<typeof toleranceRule>;

export const decisionRule = z.enum(['simple', 'guarded']);
export type DecisionRule = z.infer<typeof decisionRule>;

export const toleranceSheet = z.strictObject({
	name: z.string(),
	decision: decisionRule,
	rules: z.array(toleranceRule).max(500),
});
export type ToleranceSheet = z.infer<typeof toleranceSheet>;
