import { z } from 'zod';

/** What people say before a file is read. A reading keeps what it was read with; to change it takes the next reading. */

const spacingM = z.number().min(0.25).max(20);

/** How close checkpoints lie on a new revision, and which kinds are placed at all; a person's own stay whatever their kind. */
export const placingChoice = z.object({
	/** The widest step between neighbours on sides of walls, beams and columns, metres; edges of slabs at half as much again. */
	faceSpacingM: spacingM,
	/** The same on tops and soffits. */
	levelSpacingM: spacingM,
	kinds: z.object({ plan: z.boolean(), face: z.boolean(), level: z.boolean() }),
});
export type PlacingChoice = z.infer<typeof placingChoice>;
export type Spacing = Pick<PlacingChoice, 'faceSpacingM' | 'levelSpacingM'>;

export const usualPlacing: PlacingChoice = { faceSpacingM: 2, levelSpacingM: 3, kinds: { plan: true, face: true, level: true } };

/** Which of two readings of a map conversion's scale holds. */
export const mapScaleReadings = ['as-written', 'by-units'] as const;
export const mapScaleReading = z.enum(mapScaleReadings);
export type MapScaleReading = z.infer<typeof mapScaleReading>;

/** An axis named through two picked points, plan, design frame, metres. */
export const pickedAxis = z.object({
	tag: z.string(),
	from: z.tuple([z.number(), z.number()]),
	to: z.tuple([z.number(), z.number()]),
});
export type PickedAxis = z.infer<typeof pickedAxis>;

export const readingChoices = z.object({
	placing: placingChoice,
	/** A length unit chosen by a person where the file names two or none, metres per unit; null: as the file says. */
	metresPerUnit: z.number().positive().nullable(),
	mapScale: mapScaleReading.nullable(),
	/** Used where the file has no IfcGrid. */
	axes: z.array(pickedAxis),
});
export type ReadingChoices = z.infer<typeof readingChoices>;

/** Nothing said. */
export const noChoices: ReadingChoices = { placing: usualPlacing, metresPerUnit: null, mapScale: null, axes: [] };
