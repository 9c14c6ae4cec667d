import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { deviationSchema } from '../check/check-schema.ts';
import { characteristic, stage } from '../tolerance/sheet-schema.ts';
import { closingCause, flagAnswer, flagDecision, flagState, flagVerdict, lapseCause } from './flag-schema.ts';

export const flagSummary = z.object({
	flagId: z.uuid(),
	number: z.number().int(),
	/** Goes back with an act: who saw an older one is told, not overruled. */
	version: z.number().int(),
	modelId: z.uuid(),
	globalId: z.string(),
	kind: characteristic,
	mark: z.string(),
	title: z.string(),
	companyId: z.uuid().nullable(),
	companyName: z.string().nullable(),
	pours: z.array(z.object({ pourId: z.uuid(), number: z.string() })),
	state: flagState,
	isWith: z.enum(['contractor', 'engineers']),
	/** For a contractor: too close to call is "being measured again", with no clock. */
	verdict: flagVerdict,
	worstMm: z.number(),
	checkId: z.uuid(),
	round: z.number().int(),
	answerBy: z.date().nullable(),
	timeAsked: z.date().nullable(),
	answer: flagAnswer.nullable(),
	decision: flagDecision.nullable(),
	isDecidedWithoutAnswer: z.boolean(),
	isConsentAwaited: z.boolean(),
	closedOn: closingCause.nullable(),
	lapsedBecause: lapseCause.nullable(),
	lapsedWords: z.string().nullable(),
	raisedAt: z.date(),
	changedAt: z.date(),
});
export interface FlagSummary extends z.infer<typeof flagSummary> {}
const summaryAnswer: z.ZodType<FlagSummary> = flagSummary;

/** One checkpoint of the flag as it stands, with its survey, and all surveys that measured it, oldest first. */
export const flagPoint = z.object({
	deviation: deviationSchema,
	surveyNumber: z.number().int(),
	surveyName: z.string(),
	measuredOn: z.date(),
	stage,
	isFitChecked: z.boolean(),
	trend: z.array(
		z.object({
			surveyNumber: z.number().int(),
			measuredOn: z.date(),
			deviationMm: z.number(),
			expandedUncertaintyMm: z.number().nullable(),
			isFitAdopted: z.boolean(),
		}),
	),
	/** Two surveys that tell different things of it, in words. */
	disagreement: z.string().nullable(),
});
export type FlagPoint = z.infer<typeof flagPoint>;

export const flagPhoto = z.object({
	photoId: z.uuid(),
	/** Short-lived; null where the original cannot be shown. */
	shownAt: z.string().nullable(),
	originalSha256: z.string(),
	format: z.enum(['jpeg', 'png', 'heic']),
	widthPx: z.number().int(),
	heightPx: z.number().int(),
	addedBy: z.string(),
	addedAt: z.date(),
});
export type FlagPhoto = z.infer<typeof flagPhoto>;

export const flagEvent = z.object({
	at: z.date(),
	by: z.string().nullable(),
	/** Its state's sentence: what was answered, decided, consented to or said. */
	words: z.string(),
	text: z.string().nullable(),
});
export type FlagEvent = z.infer<typeof flagEvent>;

export const flagDetail = flagSummary.extend({
	points: z.array(flagPoint),
	history: z.array(flagEvent),
	photos: z.array(flagPhoto),
	/** Who decides, by name; for "Goes to Ida Roen". */
	projectEngineers: z.array(z.string()),
	needsOwnersConsent: z.boolean(),
});
/** By name, so that the API's own type stays short enough for the compiler to write down. */
export interface FlagDetail extends z.infer<typeof flagDetail> {}
const detailAnswer: z.ZodType<FlagDetail> = flagDetail;

/** The flags an act is on, each with the version its doer saw. */
const targets = z
	.array(z.strictObject({ flagId: z.uuid(), version: z.number().int() }))
	.min(1, 'Choose a flag first.')
	.max(1000);
const acted = z.object({ changed: z.number().int() });

export const shootListEntry = z.object({
	checkpointId: z.string(),
	globalId: z.string(),
	elementMark: z.string(),
	label: z.string(),
	characteristic,
	/** Why it is to be shot again. */
	why: z.enum(['not-measured', 'too-close', 'voided', 'put-right']),
	/** The σ that could tell, mm; null: not said. */
	sigmaMm: z.number().nullable(),
	/** Design frame, metres. */
	designPoint: z.tuple([z.number(), z.number(), z.number()]),
	pours: z.array(z.string()),
});
export type ShootListEntry = z.infer<typeof shootListEntry>;

export const flagContract = {
	/** By deadline, then by number. A contractor sees those of its companies. */
	list: base.meta({ permission: 'flag.see' }).input(siteInput).output(z.array(summaryAnswer)),
	get: base
		.meta({ permission: 'flag.see' })
		.input(siteInput.extend({ flagId: z.uuid() }))
		.output(detailAnswer),
	answer: base
		.meta({ permission: 'flag.answer' })
		.input(siteInput.extend({ flags: targets, answer: flagAnswer }))
		.output(acted),
	askTime: base
		.meta({ permission: 'flag.answer' })
		.input(siteInput.extend({ flags: targets, until: z.date() }))
		.output(acted),
	putRight: base
		.meta({ permission: 'flag.answer' })
		.input(siteInput.extend({ flags: targets }))
		.output(acted),
	/** A site engineer may say that it is to be surveyed again; all else is the project engineer's. */
	decide: base
		.meta({ permission: 'flag.decide' })
		.input(siteInput.extend({ flags: targets, decision: flagDecision }))
		.output(acted),
	grantTime: base
		.meta({ permission: 'flag.grant' })
		.input(siteInput.extend({ flags: targets }))
		.output(acted),
	consent: base
		.meta({ permission: 'flag.consent' })
		.input(siteInput.extend({ flags: targets, isGiven: z.boolean(), reason: plainText(1000) }))
		.output(acted),
	comment: base
		.meta({ permission: 'flag.comment' })
		.input(siteInput.extend({ flagId: z.uuid(), text: plainText(2000) }))
		.output(z.object({})),
	/** A photo that was sent as an upload. JPEG, PNG or HEIC by its content. */
	addPhoto: base
		.meta({ permission: 'flag.comment' })
		.input(siteInput.extend({ flagId: z.uuid(), uploadId: z.string() }))
		.output(flagPhoto),
	/** What is to be measured next: in no survey yet, too close, voided, put right. */
	shootList: base.meta({ permission: 'flag.see' }).input(siteInput).output(z.array(shootListEntry)),
	/** The same as CSV, in the frame of a set-up's survey where one is named, else in the design frame. */
	shootCsv: base
		.meta({ permission: 'flag.see' })
		.input(siteInput.extend({ fitId: z.uuid().nullable() }))
		.output(z.instanceof(Blob)),
};
