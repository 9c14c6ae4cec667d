import { z } from 'zod';
import { characteristic, derivedCharacteristics } from '../tolerance/sheet-schema.ts';

/** What a check answers for one checkpoint. Places in metres, design frame; deviations, limits and uncertainties in millimetres; + is proud or high. */

export const verdicts = ['within', 'outside', 'too-close-to-call', 'undecided', 'not-measured', 'no-tolerance'] as const;
export const verdict = z.enum(verdicts);
export type Verdict = z.infer<typeof verdict>;

const vector = z.tuple([z.number(), z.number(), z.number()]);

export const deviationSchema = z.object({
	checkpointId: z.string(),
	elementId: z.string(),
	characteristic,
	place: vector,
	direction: vector.nullable(),
	label: z.string(),
	/** Design frame, after the fit and any offset; null with a reason where nothing was measured. */
	measured: vector.nullable(),
	notMeasuredReason: z.string().nullable(),
	/** The survey point it was measured by. */
	pointName: z.string().nullable(),
	setupId: z.string().nullable(),
	pointCount: z.number().int(),
	deviationMm: z.number().nullable(),
	/** Plan only: as-built less design, east and north. */
	offsetMm: z.tuple([z.number(), z.number()]).nullable(),
	/** Plan only: of the offset, such that U = 2u (with no σ it is widened to Student's factor), so that `judge` recomputes the verdict from it. */
	covarianceMm2: z.tuple([z.tuple([z.number(), z.number()]), z.tuple([z.number(), z.number()])]).nullable(),
	/** Its parts, standard uncertainties along the direction (plan: along the long axis): fit ⊕ point ⊕ common. */
	standardUncertaintyPartsMm: z
		.object({
			fit: z.number().nullable(),
			point: z.number().nullable(),
			common: z.number(),
		})
		.nullable(),
	/** U = 2u, or Student's t where the fit has no σ. */
	expandedUncertaintyMm: z.number().nullable(),
	/** Plan: [null, radius], or of a box its lower and upper side along each axis. */
	limitsMm: z.tuple([z.number().nullable(), z.number().nullable()]).nullable(),
	/** Only where the rule is a box in plan: its first axis, counter-clockwise from east. */
	boxYawRad: z.number().nullable().optional(),
	/** The greatest distance between repeats of the point; null or absent for a single one. */
	spreadMm: z.number().nullable().optional(),
	ruleId: z.string().nullable(),
	verdict,
	/** How far beyond the limit it is exceeding, mm, where outside. */
	beyondMm: z.number().nullable(),
	conformity: z.number().nullable(),
});
export type Deviation = z.infer<typeof deviationSchema>;

export const checkSummary = z.record(verdict, z.number().int());
export type CheckSummary = z.infer<typeof checkSummary>;

/** A result made from several checkpoints of one element or group. Millimetres. */
export const derivedResultSchema = z.object({
	/** The element; of a group its first. */
	elementId: z.string(),
	characteristic: z.enum(derivedCharacteristics),
	/** In words: "leans along north over 2.4 m". */
	label: z.string(),
	/** plumb: the top over the bottom along an axis; section: + is thick; flatness: the greatest gap, or the band about the plane; bolt-distance: + is too far apart; group-shift: east or north; group-turn: anticlockwise, at the farthest mark; projection: + stands out too far. */
	deviationMm: z.number(),
	/** U with the covariance between the places; null where a part is not known. */
	uncertaintyMm: z.number().nullable(),
	limitsMm: z.tuple([z.number().nullable(), z.number().nullable()]).nullable(),
	ruleId: z.string(),
	verdict,
	conformity: z.number().nullable(),
	/** Ids of the checkpoints it is made from. */
	from: z.array(z.string()),
});
export type DerivedResult = z.infer<typeof derivedResultSchema>;
