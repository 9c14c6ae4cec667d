import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { findingSchema } from '../fit/fit-schema.ts';
import { decisionRule, stage } from '../tolerance/sheet-schema.ts';
import { checkSummary, derivedResultSchema, deviationSchema } from './check-schema.ts';

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
export interface CheckHead extends z.infer<typeof checkHead> {}
const headAnswer: z.ZodType<CheckHead> = checkHead;

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
	/** Results from several checkpoints, where the sheet has rules for them. For a contractor only those wholly on its own elements. */
	derived: z.array(derivedResultSchema),
	/** Checkpoints that were left out before the check, counted by reason; absent where there are none. */
	leftOut: z.array(z.object({ reason: z.string(), by: z.string(), count: z.number().int() })).optional(),
	/** Until when who published it may take that back; absent for all others, and where it is too late. */
	takeBackUntil: z.date().optional(),
});
/** By name, so that the API's own type stays short enough for the compiler to write down. */
export interface CheckDetail extends z.infer<typeof checkDetail> {}
const detailAnswer: z.ZodType<CheckDetail> = checkDetail;

/** What publishing would do, said before the press. */
export const publishPlan = z.object({
	/** Raised or opened again, by whose pour it is; null: in no pour, so with the engineers. */
	companies: z.array(z.object({ companyId: z.uuid().nullable(), name: z.string().nullable(), flags: z.number().int() })),
	/** Too close to call or undecided: to the engineers first, without a clock. */
	toEngineers: z.number().int(),
	closes: z.number().int(),
	/** Elements gone or limits changed. */
	lapses: z.number().int(),
	/** The deadline that the site's calendar gives. */
	answerBy: z.date(),
	/** Look for one cause before flagging each. */
	commonShift: z.array(findingSchema),
	/** Set-ups whose fit a second person has not checked. */
	uncheckedSetups: z.array(z.string()),
	/** Why it cannot be published now; null: it can. */
	refusal: z.string().nullable(),
	/** Names this plan: what is published is what was shown, or it is refused. */
	planSha256: z.string(),
});
export type PublishPlan = z.infer<typeof publishPlan>;

const checkInput = siteInput.extend({ checkId: z.uuid() });

export const checkContract = {
	/** Newest first. */
	list: base.meta({ permission: 'check.see' }).input(siteInput).output(z.array(headAnswer)),
	get: base.meta({ permission: 'check.see' }).input(checkInput).output(detailAnswer),
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
	publishPlan: base.meta({ permission: 'check.publish' }).input(checkInput).output(publishPlan),
	/** From now on it counts: its flags are raised, and the contractors concerned are told. */
	publish: base
		.meta({ permission: 'check.publish' })
		.input(checkInput.extend({ answerBy: z.date(), planSha256: z.string() }))
		.output(z.object({ raised: z.number().int() })),
	/** By who published it, within three minutes and while nobody was told: a trial again, its flags gone or as they were. */
	takeBack: base.meta({ permission: 'check.publish' }).input(checkInput).output(z.object({})),
	/** Its flags lapse, and each person who had one is told once. */
	withdraw: base
		.meta({ permission: 'check.publish' })
		.input(checkInput.extend({ reason: plainText(500) }))
		.output(z.object({ lapsed: z.number().int() })),
};
