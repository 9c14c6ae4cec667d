import { z } from 'zod';
import { plainText } from '../base-contract.ts';

/**
 * open: waits for an answer, or (too close to call, undecided) for the engineers. answered. decided: by the project engineer. put-right: done,
 * ready to measure. closed: by a published check that is within, or a concession. lapsed: nothing it rested on is there any more.
 */
export const flagStates = ['open', 'answered', 'decided', 'put-right', 'closed', 'lapsed'] as const;
export const flagState = z.enum(flagStates);
export type FlagState = z.infer<typeof flagState>;

export const flagVerdicts = ['outside', 'too-close-to-call', 'undecided'] as const;
export const flagVerdict = z.enum(flagVerdicts);
export type FlagVerdict = z.infer<typeof flagVerdict>;

/** What the contractor answers. */
export const flagAnswer = z.discriminatedUnion('kind', [
	z.strictObject({
		kind: z.literal('put-right'),
		means: z.enum(['rework', 'repair']),
		how: plainText(1000),
		/** By when, the hour at the site. */
		by: z.date(),
	}),
	z.strictObject({ kind: z.literal('concession'), why: plainText(1000) }),
	z.strictObject({
		kind: z.literal('contest'),
		why: plainText(1000),
		/** A survey of the contractor's own, fitted and checked like any other; shown beside, never in its place. */
		ownSurveyId: z.uuid().nullable(),
	}),
]);
export type FlagAnswer = z.infer<typeof flagAnswer>;

/**
 * What a concession is limited to (ISO 9000, 3.12.5: within specified limits, for a limited quantity, period and use). The value is a length, mm:
 * no deviation of the element of this kind may be farther from the design, either way.
 */
export const concessionLimits = z.strictObject({
	upToMm: z.number().positive('Say up to how many millimetres.').max(10_000),
	extent: plainText(300),
	/** How many elements or places. */
	number: z.number().int().positive().max(100_000).nullable(),
	/** Until when it holds; null: for good. */
	until: z.date().nullable(),
	use: plainText(300).nullable(),
});
export type ConcessionLimits = z.infer<typeof concessionLimits>;

/** What the project engineer decides, in the words of ISO 9000 (rework 3.12.8, repair 3.12.9, concession 3.12.5, scrap 3.12.10). */
export const flagDecision = z.discriminatedUnion('kind', [
	z.strictObject({ kind: z.literal('rework'), reason: plainText(1000), by: z.date().nullable() }),
	z.strictObject({ kind: z.literal('repair'), reason: plainText(1000), by: z.date().nullable() }),
	z.strictObject({
		kind: z.literal('concession'),
		reason: plainText(1000),
		conditions: plainText(1000).nullable(),
		limits: concessionLimits,
	}),
	z.strictObject({ kind: z.literal('reject-and-replace'), reason: plainText(1000), by: z.date().nullable() }),
	z.strictObject({
		kind: z.literal('survey-again'),
		reason: plainText(1000),
		/** The σ at which the survey could tell, mm; null: not said. */
		sigmaMm: z.number().positive().max(1000).nullable(),
	}),
	/** Too close to call or undecided: the deviation counts as it was found, without its uncertainty. */
	z.strictObject({ kind: z.literal('taken-as-measured'), reason: plainText(1000) }),
]);
export type FlagDecision = z.infer<typeof flagDecision>;

/** Why a flag lapsed: each is a sentence on the flag. */
export const lapseCauses = ['check-withdrawn', 'element-gone', 'limits-changed'] as const;
export const lapseCause = z.enum(lapseCauses);
export type LapseCause = z.infer<typeof lapseCause>;

/** On what a flag was closed. `taken-as-measured`: too close to call, inside its limits by the deviation alone, taken so with a reason. */
export const closingCauses = ['check-within', 'concession', 'taken-as-measured'] as const;
export const closingCause = z.enum(closingCauses);
export type ClosingCause = z.infer<typeof closingCause>;

/**
 * The worst place of a flag as a rod shows it: millimetres with sign, + proud or high, in plan the distance. Its limits: a side without one is null.
 * The offset (east, north) stands of a plan deviation, the direction (unit, design frame) of a face.
 */
export const worstDeviation = z.object({
	label: z.string(),
	deviationMm: z.number(),
	expandedUncertaintyMm: z.number().nullable(),
	limitsMm: z.tuple([z.number().nullable(), z.number().nullable()]).nullable(),
	offsetMm: z.tuple([z.number(), z.number()]).nullable(),
	direction: z.tuple([z.number(), z.number(), z.number()]).nullable(),
	verdict: z.enum(['within', ...flagVerdicts]),
	beyondMm: z.number().nullable(),
});
export type WorstDeviation = z.infer<typeof worstDeviation>;
