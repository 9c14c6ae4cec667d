import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { deviationSchema } from '../check/check-schema.ts';
import { characteristic, stage } from '../tolerance/sheet-schema.ts';
import { closingCause, flagAnswer, flagDecision, flagState, flagVerdict, lapseCause, worstDeviation } from './flag-schema.ts';

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
	/** The worst place with its sign, for a rod; null: flagged before it was kept. */
	worst: worstDeviation.nullable(),
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

/** East and north, metres, of a box in plan: smallest, then largest. */
const planBox = z.tuple([z.number(), z.number(), z.number(), z.number()]);

/** Where the element stands among those of its kind on its storey; design frame. */
export const flagPlan = z.object({ own: planBox, others: z.array(planBox) });
export type FlagPlan = z.infer<typeof flagPlan>;

/** Points that a contractor brought, and what a check by them found of the flag's element and kind: beside, never in place. */
export const broughtPointsSchema = z.object({
	broughtId: z.uuid(),
	fileName: z.string(),
	fileSha256: z.string(),
	companyName: z.string(),
	broughtBy: z.string(),
	broughtAt: z.date(),
	/** Null: a site engineer has not stored them as a survey yet. */
	surveyId: z.uuid().nullable(),
	surveyNumber: z.number().int().nullable(),
	/** The newest check by that survey; null: none yet. */
	checkId: z.uuid().nullable(),
	deviations: z.array(deviationSchema),
});
export type BroughtPoints = z.infer<typeof broughtPointsSchema>;

export const flagDetail = flagSummary.extend({
	points: z.array(flagPoint),
	history: z.array(flagEvent),
	photos: z.array(flagPhoto),
	/** Who decides, by name; for "Goes to Ida Roen". */
	projectEngineers: z.array(z.string()),
	needsOwnersConsent: z.boolean(),
	/** Null where the newest revision has the element no more, or no box of it. */
	plan: flagPlan.nullable(),
	brought: z.array(broughtPointsSchema),
	/** Surveys of points that its company has brought: what a contest may name. */
	ownSurveys: z.array(z.object({ surveyId: z.uuid(), number: z.number().int(), name: z.string() })),
	/** The asking person's own act, while it can be taken back. */
	takeBack: z.object({ actId: z.uuid(), until: z.date() }).nullable(),
});
/** By name, so that the API's own type stays short enough for the compiler to write down. */
export interface FlagDetail extends z.infer<typeof flagDetail> {}
const detailAnswer: z.ZodType<FlagDetail> = flagDetail;

/** The flags an act is on, each with the version its doer saw. */
const targets = z
	.array(z.strictObject({ flagId: z.uuid(), version: z.number().int() }))
	.min(1, 'Choose a flag first.')
	.max(1000);
/** Made by who acts: the same act sent twice is done once. */
const actId = z.uuid().optional();
const acted = z.object({ changed: z.number().int(), actId: z.uuid() });

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
		.input(siteInput.extend({ flags: targets, answer: flagAnswer, actId }))
		.output(acted),
	askTime: base
		.meta({ permission: 'flag.answer' })
		.input(siteInput.extend({ flags: targets, until: z.date(), actId }))
		.output(acted),
	putRight: base
		.meta({ permission: 'flag.answer' })
		.input(siteInput.extend({ flags: targets, actId }))
		.output(acted),
	/** A site engineer may say that it is to be surveyed again; all else is the project engineer's. */
	decide: base
		.meta({ permission: 'flag.decide' })
		.input(siteInput.extend({ flags: targets, decision: flagDecision, actId }))
		.output(acted),
	grantTime: base
		.meta({ permission: 'flag.grant' })
		.input(siteInput.extend({ flags: targets, actId }))
		.output(acted),
	consent: base
		.meta({ permission: 'flag.consent' })
		.input(siteInput.extend({ flags: targets, isGiven: z.boolean(), reason: plainText(1000), actId }))
		.output(acted),
	/** One's own answer or decision, for three minutes, while nobody has acted on it and nobody was told. */
	takeBack: base
		.meta({ permission: 'flag.comment' })
		.input(siteInput.extend({ actId: z.uuid() }))
		.output(z.object({ changed: z.number().int() })),
	/** A contractor's own points beside a contest: the file as it is. */
	bringPoints: base
		.meta({ permission: 'flag.answer' })
		.input(siteInput.extend({ flagId: z.uuid(), uploadId: z.string() }))
		.output(z.object({ broughtId: z.uuid() })),
	/** Says which survey the brought points were stored as. It takes no measurement's place and is never published. */
	storePoints: base
		.meta({ permission: 'survey.write' })
		.input(siteInput.extend({ broughtId: z.uuid(), surveyId: z.uuid() }))
		.output(z.object({})),
	/** The file that was brought, for who sees its flag. */
	broughtFile: base
		.meta({ permission: 'flag.see' })
		.input(siteInput.extend({ broughtId: z.uuid() }))
		.output(z.instanceof(Blob)),
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
