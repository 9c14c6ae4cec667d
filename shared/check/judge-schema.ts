import { z } from 'zod';
import { isPlanCovariance } from '../geometry/plan-covariance.ts';
import { decisionRule } from '../tolerance/sheet-schema.ts';

/** What `judge` asks for: one deviation, its standard uncertainty and its limits. Millimetres. */

const orderedLimits = z
	.tuple([z.number().nullable(), z.number().nullable()])
	.refine(([lower, upper]) => lower === null || upper === null || lower <= upper, 'the lower limit is above the upper one');

/** Along a line: a face, a level, a length. + is proud or high. */
export const lineJudgement = z.object({
	characteristic: z.string().optional(),
	deviationMm: z.number(),
	/** null: not known. */
	standardUncertaintyMm: z.number().min(0, 'a standard uncertainty is not negative').nullable(),
	/** A side without limit is null. */
	limitsMm: orderedLimits,
	decision: decisionRule,
});
export type LineJudgement = z.infer<typeof lineJudgement>;

const planCovariance = z
	.tuple([z.tuple([z.number(), z.number()]), z.tuple([z.number(), z.number()])])
	.refine(isPlanCovariance, 'this is no covariance: it must be symmetric, with no negative variance in any direction');

/** In plan, within a circle about the mark. */
export const discJudgement = z.object({
	characteristic: z.literal('plan'),
	/** As-built less design, east and north. */
	offsetMm: z.tuple([z.number(), z.number()]),
	covarianceMm2: planCovariance.nullable(),
	radiusMm: z.number().min(0, 'a radius is not negative'),
	decision: decisionRule,
});
export type DiscJudgement = z.infer<typeof discJudgement>;

/** In plan, between two limits along each of two axes; the first is turned by yaw from east, counter-clockwise. */
export const boxJudgement = z.object({
	characteristic: z.literal('plan'),
	offsetMm: z.tuple([z.number(), z.number()]),
	covarianceMm2: planCovariance.nullable(),
	limitsMm: orderedLimits,
	boxYawRad: z.number(),
	decision: decisionRule,
});
export type BoxJudgement = z.infer<typeof boxJudgement>;

export type Judgement = LineJudgement | DiscJudgement | BoxJudgement;
