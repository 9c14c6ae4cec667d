import { z } from 'zod';
import { base, siteInput } from '../base-contract.ts';
import { findingSchema } from '../fit/fit-schema.ts';
import { decisionRule, stage } from '../tolerance/sheet-schema.ts';
import { checkSummary, deviationSchema } from './check-schema.ts';

export const checkState = z.enum(['computing', 'trial', 'published', 'withdrawn', 'failed']);

export const checkHead = z.object({
	checkId: z.uuid(),
	number: z.number().int(),
	state: checkState,
	reason: z.string().nullable(),
	jobId: z.uuid().nullable(),
	stage,
	/** What it rests on, for the strip. */
	revision: z.object({
		revisionId: z.uuid(),
		modelName: z.string(),
		number: z.number().int(),
		isNewest: z.boolean(),
	}),
	survey: z.object({
		surveyId: z.uuid(),
		number: z.number().int(),
		name: z.string(),
		surveyedOn: z.string(),
		setupCount: z.number().int(),
	}),
	fits: z.array(
		z.object({
			fitId: z.uuid(),
			setupId: z.uuid(),
			setupName: z.string(),
			number: z.number().int(),
			adoptedBy: z.string(),
			checkedBy: z.string().nullable(),
			isNewest: z.boolean(),
		}),
	),
	/** False where the site has switched the second person off: its fits are not unchecked then, nobody asks for it. */
	isSecondPersonAsked: z.boolean(),
	sheet: z.object({
		sheetId: z.uuid(),
		name: z.string(),
		revision: z.number().int(),
		decision: decisionRule,
		isNewest: z.boolean(),
	}),
	summary: checkSummary,
	madeBy: z.string(),
	madeAt: z.date(),
	/** Over all inputs' hashes. */
	inputsSha256: z.string(),
});
export type CheckHead = z.infer<typeof checkHead>;

/** What a row of the table needs to know of its element. */
export const checkElement = z.object({
	elementId: z.uuid(),
	globalId: z.string(),
	entityNumber: z.number().int(),
	class: z.string(),
	title: z.string(),
	mark: z.string(),
	storey: z.string(),
	pourIds: z.array(z.uuid()),
});
export type CheckElement = z.infer<typeof checkElement>;

export const checkDetail = checkHead.extend({
	findings: z.array(findingSchema),
	/** Points of the survey that met no checkpoint. */
	unmatchedPoints: z.array(z.object({ name: z.string(), setupId: z.string(), reason: z.string() })),
	elements: z.array(checkElement),
	/** In checkpoint order. For a contractor only those of its own pours. */
	deviations: z.array(deviationSchema),
	/** Checkpoints that were left out before the check, counted by reason; absent where there are none. */
	leftOut: z.array(z.object({ reason: z.string(), by: z.string(), count: z.number().int() })).optional(),
});
export type CheckDetail = z.infer<typeof checkDetail>;

const checkInput = siteInput.extend({ checkId: z.uuid() });

export const checkContract = {
	/** Newest first. */
	list: base.meta({ permission: 'check.see' }).input(siteInput).output(z.array(checkHead)),
	get: base.meta({ permission: 'check.see' }).input(checkInput).output(checkDetail),
	csv: base.meta({ permission: 'check.see' }).input(checkInput).output(z.instanceof(Blob)),
	/** On the adopted fits of the survey's set-ups; a job computes it. Starts as a trial. */
	run: base
		.meta({ permission: 'check.write' })
		.input(
			siteInput.extend({
				revisionId: z.uuid(),
				surveyId: z.uuid(),
				sheetId: z.uuid(),
			}),
		)
		.output(z.object({ checkId: z.uuid(), jobId: z.uuid() })),
};
