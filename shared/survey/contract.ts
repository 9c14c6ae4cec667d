import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { stage } from '../tolerance/sheet-schema.ts';
import { setupObservation, surveyObservation } from './observation-record.ts';
import { pointTableReading, rowFault } from './point-table-schema.ts';

export const setupInput = z.object({
	/** As the file's set-up column names it; "1" where the file has none. */
	name: plainText(40),
	/** levelled: Z is plumb. free: no compensator. */
	levelling: z.enum(['levelled', 'free']),
	/** The instrument brings its own scale, so the fit has none. */
	bringsScale: z.boolean(),
	/** For points that bring none; null: not known. */
	pointSigmaM: z
		.strictObject({
			plan: z.number().positive().max(10),
			height: z.number().positive().max(10),
		})
		.nullable(),
	/** What the set-up's points share and no residual shows; 2 where nothing is entered. */
	commonMm: z.number().min(0).max(1000),
	instrumentHeightM: z.number().min(-10).max(10).nullable(),
	/** Absent: nothing was said of it. */
	observation: setupObservation.optional(),
});
export type SetupInput = z.infer<typeof setupInput>;

export const surveyForm = z.object({
	name: plainText(60),
	stage,
	surveyedOn: z.iso.date('Write the date as 2026-12-01.'),
	observer: plainText(80),
	instrument: plainText(80),
	serial: plainText(60),
	/** How it was measured; absent: nothing was said of it. */
	observation: surveyObservation.optional(),
});
export type SurveyForm = z.infer<typeof surveyForm>;

export const setupSummary = setupInput.extend({
	setupId: z.uuid(),
	pointCount: z.number().int(),
	/** Points named as a point of the newest control set. */
	targetCount: z.number().int(),
	adoptedFitId: z.uuid().nullable(),
});
export type SetupSummary = z.infer<typeof setupSummary>;

export const surveySummary = surveyForm.extend({
	surveyId: z.uuid(),
	number: z.number().int(),
	fileName: z.string(),
	fileSha256: z.string(),
	pointCount: z.number().int(),
	state: z.enum(['storing', 'ready', 'failed']),
	reason: z.string().nullable(),
	jobId: z.uuid().nullable(),
	storedBy: z.string(),
	storedAt: z.date(),
	setups: z.array(setupSummary),
});
export type SurveySummary = z.infer<typeof surveySummary>;

export const surveyPoint = z.object({
	row: z.number().int(),
	setupId: z.uuid(),
	name: z.string(),
	/** Survey frame of its set-up. */
	surveyM: z.tuple([z.number(), z.number(), z.number()]),
	sigmaM: z.tuple([z.number(), z.number(), z.number()]).nullable(),
	offsetMm: z.number(),
	code: z.string(),
	isTarget: z.boolean(),
	/** Why later fits and checks pass over it; absent where they do not. */
	voidedReason: z.string().optional(),
});
export type StoredSurveyPoint = z.infer<typeof surveyPoint>;

/** Rows of the file, both ends with them; `toRow` null: to its end. */
const voidInput = siteInput.extend({
	setupId: z.uuid(),
	fromRow: z.number().int().min(1),
	toRow: z.number().int().min(1).nullable(),
	reason: plainText(300),
});

export const voidedPoints = z.object({
	/** Points that were voided, or taken back, by this. */
	pointCount: z.number().int(),
	/** Points of the set-up that count now. */
	leftCount: z.number().int(),
	/** The set-up's adopted fit, which keeps the pairs it was made of. */
	adoptedFitNumber: z.number().int().nullable(),
});
export type VoidedPoints = z.infer<typeof voidedPoints>;

const surveyInput = siteInput.extend({ surveyId: z.uuid() });

export const surveyContract = {
	/** Newest first. */
	list: base.meta({ permission: 'survey.see' }).input(siteInput).output(z.array(surveySummary)),
	get: base.meta({ permission: 'survey.see' }).input(surveyInput).output(surveySummary),
	/** In the file's order, at most `limit` from `offset`. */
	points: base
		.meta({ permission: 'survey.see' })
		.input(
			surveyInput.extend({
				offset: z.number().int().min(0).default(0),
				limit: z.number().int().min(1).max(20_000).default(20_000),
			}),
		)
		.output(z.object({ total: z.number().int(), points: z.array(surveyPoint) })),
	/** All rows or none; more than 10 000 rows are stored by a job. */
	store: base
		.meta({ permission: 'survey.write' })
		.errors({
			FAULTS: {
				status: 422,
				message: 'Some rows cannot be read; nothing was stored.',
				data: z.object({
					rowCount: z.number().int(),
					faults: z.array(rowFault),
				}),
			},
		})
		.input(
			siteInput.extend({
				uploadId: z.string().min(8).max(80),
				survey: surveyForm.strict(),
				setups: z.array(setupInput.strict()).min(1).max(50),
				reading: pointTableReading,
			}),
		)
		.output(z.object({ surveyId: z.uuid(), jobId: z.uuid().nullable() })),
	/** Later fits and checks pass over these points; those made before stand on what they were made of. */
	voidPoints: base.meta({ permission: 'survey.write' }).input(voidInput).output(voidedPoints),
	/** Takes it back: they count again. */
	unvoidPoints: base.meta({ permission: 'survey.write' }).input(voidInput).output(voidedPoints),
};
