import { z } from 'zod';

/** How a point file is to be read: what was recognised, and what a person said where it could not be. */

export const lengthUnits = ['m', 'mm', 'ft', 'ftUS'] as const;
export const lengthUnit = z.enum(lengthUnits);
export type LengthUnit = z.infer<typeof lengthUnit>;

/** What a column can be. `easting`/`northing`/`height` stand for x/y/z too. */
export const pointFields = [
	'name',
	'easting',
	'northing',
	'height',
	'code',
	'setup',
	'sigmaX',
	'sigmaY',
	'sigmaZ',
	'sigmaPlan',
	'sigmaHeight',
	'offsetMm',
] as const;
export const pointField = z.enum(pointFields);
export type PointField = z.infer<typeof pointField>;

export const pointTableReading = z.strictObject({
	encoding: z.enum(['utf-8', 'utf-16le', 'utf-16be', 'windows-1252']),
	delimiter: z.enum([',', ';', '\t', ' ']),
	decimalMark: z.enum(['.', ',']),
	hasHeader: z.boolean(),
	unit: lengthUnit,
	/** Field → column, counted from 0. Name and the three coordinates are needed; control may do without plan or height. */
	columns: z.partialRecord(pointField, z.number().int().min(0).max(199)),
});
export type PointTableReading = z.infer<typeof pointTableReading>;

/** Why a row cannot be stored, as a sentence: "Row 14: northing 'N/A' is not a number." */
export const rowFault = z.object({
	row: z.number().int(),
	column: z.string().nullable(),
	value: z.string().nullable(),
	message: z.string(),
});
export type RowFault = z.infer<typeof rowFault>;
