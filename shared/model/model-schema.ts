import { z } from 'zod';
import { findingSchema } from '../fit/fit-schema.ts';
import { characteristic } from '../tolerance/sheet-schema.ts';
import { mapScaleReading, readingChoices } from './reading-choices.ts';

/** What reading an IFC file gives. Metres, design frame (the file's own engineering coordinates, Z up), double precision. */

const vector = z.tuple([z.number(), z.number(), z.number()]);

export const elementSchema = z.object({
	/** Entity number in the file: the inner key within one revision (GlobalIds may repeat or be missing). */
	entityNumber: z.number().int(),
	/** Known by it across revisions. */
	globalId: z.string(),
	/** The file's own, where the element is known under another. */
	fileGlobalId: z.string().optional(),
	/** IFC class as written in the schema: IfcColumn. A hint; shape decides. */
	class: z.string(),
	name: z.string(),
	tag: z.string(),
	storey: z.string(),
	/** Grid and storey in at most 16 characters for the field, unique in the file: "C3-G". */
	mark: z.string(),
	/** The same for people: "Column C/3, ground". */
	title: z.string(),
	/** Sizes of the body, null where the shape does not give them. */
	sizesM: z.object({
		length: z.number().nullable(),
		height: z.number().nullable(),
		thickness: z.number().nullable(),
	}),
	/** Box in the design frame; null without geometry. */
	boxM: z.object({ min: vector, max: vector }).nullable(),
});
export type Element = z.infer<typeof elementSchema>;

export const checkpointSchema = z.object({
	/** The same at every reading of the same file, and across revisions for an unchanged element. */
	id: z.string(),
	entityNumber: z.number().int(),
	globalId: z.string(),
	mark: z.string(),
	characteristic,
	/** Design frame. */
	place: vector,
	/** Outward unit normal of a face; null for plan and level. */
	direction: vector.nullable(),
	/** In words: "East face, 2.8 m above its base". */
	label: z.string(),
	/** Level only: the design surface z = a·x + b·y + c, so that falls count at the measured place; a, b are 0 on a flat top. */
	surface: z.tuple([z.number(), z.number(), z.number()]).nullable(),
	/** Level only: + is high on a soffit too. */
	isSoffit: z.boolean(),
});
export type Checkpoint = z.infer<typeof checkpointSchema>;

export const mapConversion = z.object({
	eastings: z.number(),
	northings: z.number(),
	orthogonalHeight: z.number(),
	xAxisAbscissa: z.number(),
	xAxisOrdinate: z.number(),
	/** As written; 1 where it is not. */
	scale: z.number(),
	/** Metres per unit of the map coordinates. */
	mapUnitM: z.number(),
	crsName: z.string().nullable(),
	/** Which reading of a contradictory scale a person chose; `scale` is already that. */
	chosenScale: mapScaleReading.optional(),
});
export type MapConversion = z.infer<typeof mapConversion>;

/** An axis of an IfcGrid as a polyline in plan, design frame. */
export const gridAxis = z.object({
	tag: z.string(),
	direction: z.enum(['u', 'v', 'w']),
	points: z.array(z.tuple([z.number(), z.number()])),
});
export type GridAxis = z.infer<typeof gridAxis>;

export const modelReading = z.object({
	schema: z.string(),
	/** In words: "millimetre". */
	unit: z.string(),
	metresPerUnit: z.number(),
	project: z.string(),
	mapConversion: mapConversion.nullable(),
	storeys: z.array(z.object({ name: z.string(), elevationM: z.number().nullable() })),
	grid: z.array(gridAxis),
	elements: z.array(elementSchema),
	checkpoints: z.array(checkpointSchema),
	skipped: z.array(
		z.object({
			entityNumber: z.number().int(),
			globalId: z.string(),
			class: z.string(),
			why: z.string(),
		}),
	),
	findings: z.array(findingSchema),
	/** What people had said when the file was read; absent in readings of before that could be said. */
	choices: readingChoices.optional(),
});
export type ModelReading = z.infer<typeof modelReading>;
