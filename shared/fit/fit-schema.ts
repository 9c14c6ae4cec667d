import { z } from 'zod';

/** What a fit asks for and answers: the shapes of the command line's `fit`, used alike by server, browser and command line. Metres and radians. */

export const fitKinds = ['height', 'levelled', 'levelled-scaled', 'free', 'free-scaled'] as const;
export const fitKind = z.enum(fitKinds);
export type FitKind = z.infer<typeof fitKind>;

/** x, y, z; a coordinate that is not known (a benchmark's plan) is null. */
const vector = z.tuple([z.number(), z.number(), z.number()]);
const partialVector = z.tuple([z.number().nullable(), z.number().nullable(), z.number().nullable()]);
const matrix3 = z.tuple([vector, vector, vector]);

export const fitPair = z.object({
	name: z.string(),
	survey: partialVector,
	control: partialVector,
	/** > 0; only where no σ is given. */
	weight: z.number().positive().optional(),
	surveySigma: vector.optional(),
	controlSigma: vector.optional(),
	/** Checked against the fit, never in it. */
	heldBack: z.boolean().optional(),
});
export type FitPair = z.infer<typeof fitPair>;

export const fitInput = z.object({
	fit: fitKind,
	/** A grid/ground factor, fixed; multiplies plan only on levelled fits. */
	knownScale: z.number().positive().optional(),
	pairs: z.array(fitPair),
	/** Where the instrument stood, survey frame. */
	station: vector.optional(),
	/** Points to carry over, with covariance. */
	carry: z
		.array(
			z.object({
				name: z.string(),
				survey: vector,
				surveySigma: vector.optional(),
			}),
		)
		.optional(),
	confidence: z.number().gt(0).lt(1).optional(),
});
export type FitInput = z.infer<typeof fitInput>;

export const findingSchema = z.object({
	code: z.string(),
	/** Names of the pairs, targets or checkpoints it speaks of; empty where several explanations are as good. */
	pairs: z.array(z.string()),
	message: z.string(),
	evidence: z.record(z.string(), z.unknown()),
});
export type Finding = z.infer<typeof findingSchema>;

export const fitPairResult = z.object({
	name: z.string(),
	/** Where the fit puts the survey point minus the control point, metres, control frame. Null along an axis that is not known. */
	residual: partialVector,
	redundancy: z.number().nullable(),
	normalised: z.number().nullable(),
	critical: z.number().nullable(),
	smallestBlunder: z.number().nullable(),
	leaveOneOut: partialVector.nullable(),
	heldBack: z.boolean(),
	sigma: partialVector.optional(),
});
export type FitPairResult = z.infer<typeof fitPairResult>;

export const fitResult = z.object({
	fit: fitKind,
	scale: z.number(),
	rotation: matrix3,
	translation: vector,
	/** control ≈ s·R·(survey − origin) + shift; survey frame. */
	origin: vector,
	/** Where the fit puts the origin, control frame: carrying by origin and shift loses nothing at map size, by translation a nanometre. */
	shift: vector.optional(),
	/** Whether standard deviations were given: their covariances are then not scaled by the variance factor. */
	sigmaGiven: z.boolean().optional(),
	/** False where a known scale multiplies plan only (levelled fits that do not estimate it). */
	scalesHeights: z.boolean().optional(),
	/** Q for small changes of shift (E, N, H, metres), turns about E, N, H (radians, after R), relative scale; unknowns the fit has not are left out. */
	parameterCovariance: z.array(z.array(z.number())),
	rms: z.number(),
	redundancy: z.number().int(),
	varianceFactor: z.number().nullable(),
	chiSquare: z
		.object({
			statistic: z.number(),
			lower: z.number(),
			upper: z.number(),
			passes: z.boolean(),
		})
		.nullable(),
	pairs: z.array(fitPairResult),
	carried: z.array(
		z.object({
			name: z.string(),
			point: vector,
			covariance: matrix3.nullable(),
			hiddenBlunder: z.object({ metres: z.number(), pair: z.string() }).nullable(),
		}),
	),
	findings: z.array(findingSchema),
});
export type FitResult = z.infer<typeof fitResult>;

export const fitRefusalCodes = [
	'bad-input',
	'not-finite',
	'duplicate-name',
	'too-few-pairs',
	'no-spread',
	'on-a-line',
	'bad-sigma',
	'no-solution',
] as const;
export type FitRefusalCode = (typeof fitRefusalCodes)[number];

/** An input that has no answer: which condition failed, in words, and where in the input. */
export const fitRefusal = z.object({
	code: z.enum(fitRefusalCodes),
	message: z.string(),
	where: z.string().optional(),
});
export type FitRefusal = z.infer<typeof fitRefusal>;

export type FitOutcome = { ok: true; result: FitResult } | { ok: false; refusal: FitRefusal };
