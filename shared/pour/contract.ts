import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { recordedCheckpoint, sha256Text, shownPour } from '../record/sealed-record.ts';
import { stationStates } from './board-row.ts';
import { holdPointKinds, holdPointStates, pourStates } from './pour-life.ts';

export const holdPointKind = z.enum(holdPointKinds);

export const pourSummary = z.object({
	pourId: z.uuid(),
	number: z.string(),
	name: z.string(),
	companyId: z.uuid(),
	companyName: z.string(),
	plannedAt: z.date().nullable(),
	elementCount: z.number().int(),
	state: z.enum(pourStates),
	before: z.enum(holdPointStates),
	after: z.enum(holdPointStates),
	isHeld: z.boolean(),
});
export interface PourSummary extends z.infer<typeof pourSummary> {}
const summaryAnswer: z.ZodType<PourSummary> = pourSummary;

/** A pour as it stands on the board. */
export const pourBoardRow = pourSummary.extend({
	/** Surveyed, checked, flags, released: before the concrete, then after it. */
	stations: z.array(z.enum(stationStates)).length(8),
	/** The first station that is not in order; null: all are. */
	at: z.number().int().nullable(),
	isTaut: z.boolean(),
	/** Why, a sentence without full stop, and the hour that ends it. */
	words: z.string(),
	moment: z.object({ word: z.enum(['since', 'by', '']), at: z.date() }).nullable(),
	worst: recordedCheckpoint.nullable(),
	castAt: z.date().nullable(),
	hold: z.object({ reasons: z.array(z.string()), raisedAt: z.date(), seenByYouAt: z.date().nullable() }).nullable(),
	/** Of the release in hand, not met yet. */
	conditions: z.array(z.object({ text: z.string(), owner: z.string(), dueAt: z.date().nullable() })),
	signedBy: z.string().nullable(),
	signedAt: z.date().nullable(),
});
export interface PourBoardRow extends z.infer<typeof pourBoardRow> {}
const boardAnswer: z.ZodType<PourBoardRow> = pourBoardRow;

export const pourForm = z.strictObject({
	number: plainText(12),
	name: plainText(60),
	companyId: z.uuid(),
	plannedAt: z.date().nullable(),
	/** The model whose elements are concreted together, and which: whole storeys' classes. */
	modelId: z.uuid(),
	elements: z
		.array(z.strictObject({ storey: z.string().max(200), class: z.string().max(60) }))
		.min(1, 'Choose at least one kind of element.')
		.max(200),
});

export const pourCondition = z.object({
	conditionId: z.uuid(),
	text: z.string(),
	owner: z.string(),
	proof: z.string(),
	dueAt: z.date().nullable(),
	isMet: z.boolean(),
	metBy: z.string().nullable(),
	metAt: z.date().nullable(),
	metWords: z.string().nullable(),
});
export type PourCondition = z.infer<typeof pourCondition>;

export const holdPointDetail = z.object({
	kind: holdPointKind,
	state: z.enum(holdPointStates),
	list: z.array(z.object({ question: z.string(), answer: z.string().nullable() })),
	readyFrom: z.date().nullable(),
	calledBy: z.string().nullable(),
	calledAt: z.date().nullable(),
	submittedBy: z.string().nullable(),
	submittedAt: z.date().nullable(),
	statement: z.string().nullable(),
	signedBy: z.string().nullable(),
	signedAt: z.date().nullable(),
	recordId: z.uuid().nullable(),
	conditions: z.array(pourCondition),
});
export type HoldPointDetail = z.infer<typeof holdPointDetail>;

export const pourDetail = pourSummary.extend({
	concretingFrom: z.date().nullable(),
	concretingTo: z.date().nullable(),
	partOf: z.object({ pourId: z.uuid(), number: z.string() }).nullable(),
	points: z.object({ 'before-pour': holdPointDetail, 'after-pour': holdPointDetail }),
	/** "Hold: do not pour", while it stands. */
	hold: z
		.object({
			reasons: z.array(z.string()),
			raisedAt: z.date(),
			seen: z.array(z.object({ name: z.string(), at: z.date() })),
			isSeenByYou: z.boolean(),
		})
		.nullable(),
	witnessPoints: z.array(
		z.object({
			witnessId: z.uuid(),
			what: z.string(),
			at: z.date(),
			noticeBy: z.string(),
			hasCome: z.boolean().nullable(),
			note: z.string().nullable(),
			saidBy: z.string().nullable(),
		}),
	),
});
/** By name, so that the API's own type stays short enough for the compiler to write down. */
export interface PourDetail extends z.infer<typeof pourDetail> {}
const pourAnswer: z.ZodType<PourDetail> = pourDetail;

export const shownHoldPoint = z.object({
	shown: shownPour,
	/** Goes with the request to sign: what is signed is what was shown. */
	shownSha256: sha256Text,
	readiness: z.array(z.object({ text: z.string(), isGood: z.boolean() })),
	/** Of a released pour: what touches it since; none: it stands. */
	touches: z.array(z.string()),
	/** Why you cannot sign it; null where you can. Null too for who signs nothing. */
	whyNotSign: z.string().nullable(),
});
export interface ShownHoldPoint extends z.infer<typeof shownHoldPoint> {}
const shownAnswer: z.ZodType<ShownHoldPoint> = shownHoldPoint;

const elementRefs = z.array(z.strictObject({ modelId: z.uuid(), globalId: z.string().min(1).max(100) })).max(20_000);

const pourInput = siteInput.extend({ pourId: z.uuid() });
const pointInput = pourInput.extend({ point: holdPointKind });

export const statementText = plainText(2000);
export const conditionForm = z.strictObject({
	text: plainText(300),
	owner: plainText(80),
	dueAt: z.date().nullable(),
	/** What shows that it was done. */
	proof: plainText(200),
});

export const pourContract = {
	/** By planned hour. A contractor sees those of its company. */
	list: base.meta({ permission: 'pour.see' }).input(siteInput).output(z.array(summaryAnswer)),
	/** The same pours with where each stands: every figure of all of them is read. */
	board: base.meta({ permission: 'pour.see' }).input(siteInput).output(z.array(boardAnswer)),
	add: base
		.meta({ permission: 'pour.write' })
		.input(siteInput.extend({ pour: pourForm }))
		.output(summaryAnswer),
	/** Puts elements in and takes others out, until it is submitted. */
	changeElements: base
		.meta({ permission: 'pour.write' })
		.input(pourInput.extend({ add: elementRefs, takeOut: elementRefs }))
		.output(pourAnswer),
	/** Whose these elements are, where not the pour's company's; null: the pour's own again. */
	giveElements: base
		.meta({ permission: 'pour.write' })
		.input(pourInput.extend({ elements: elementRefs.min(1, 'Choose at least one element.'), companyId: z.uuid().nullable() }))
		.output(pourAnswer),
	get: base.meta({ permission: 'pour.see' }).input(pourInput).output(pourAnswer),
	/** All that is signed at a hold point, as it stands now. */
	shown: base.meta({ permission: 'pour.see' }).input(pointInput).output(shownAnswer),
	/** The questions of a hold-point list, while it is not submitted; answers of questions that stay are kept. */
	setList: base
		.meta({ permission: 'pour.write' })
		.input(pointInput.extend({ questions: z.array(plainText(200)).max(50) }))
		.output(pourAnswer),
	/** "Ready from Thu 06:30", with the list answered. */
	call: base
		.meta({ permission: 'pour.call' })
		.input(pointInput.extend({ readyFrom: z.date(), answers: z.array(z.string().trim().max(300)).max(50) }))
		.output(pourAnswer),
	submit: base.meta({ permission: 'pour.submit' }).input(pointInput).output(pourAnswer),
	/** Signs. With conditions it is released with those. Makes the sealed record. */
	release: base
		.meta({ permission: 'pour.release' })
		.input(pointInput.extend({ statement: statementText, shownSha256: sha256Text, conditions: z.array(conditionForm).max(50) }))
		.output(z.object({ recordId: z.uuid(), sequence: z.number().int(), head: sha256Text })),
	askMore: base
		.meta({ permission: 'pour.release' })
		.input(pointInput.extend({ statement: statementText }))
		.output(pourAnswer),
	/** Signs that it is refused. Makes a sealed record. */
	refuse: base
		.meta({ permission: 'pour.release' })
		.input(pointInput.extend({ statement: statementText, shownSha256: sha256Text }))
		.output(z.object({ recordId: z.uuid(), sequence: z.number().int(), head: sha256Text })),
	/** Takes a release back, as a record of its own; before the concrete it holds the pour. */
	withdraw: base
		.meta({ permission: 'pour.release' })
		.input(pointInput.extend({ statement: statementText }))
		.output(z.object({ recordId: z.uuid(), sequence: z.number().int(), head: sha256Text })),
	beginConcreting: base
		.meta({ permission: 'pour.call' })
		.input(pourInput.extend({ at: z.date() }))
		.output(pourAnswer),
	/** Cast whole, or in part: what was not cast goes to a pour of its own, with new hold points. */
	endConcreting: base
		.meta({ permission: 'pour.call' })
		.input(
			pourInput.extend({
				at: z.date(),
				notCast: z.array(z.strictObject({ modelId: z.uuid(), globalId: z.string().max(100) })).max(20_000),
			}),
		)
		.output(z.object({ pour: pourAnswer, restPourId: z.uuid().nullable() })),
	seeHold: base.meta({ permission: 'pour.see' }).input(pourInput).output(pourAnswer),
	giveNotice: base
		.meta({ permission: 'pour.call' })
		.input(pourInput.extend({ what: plainText(200), at: z.date() }))
		.output(pourAnswer),
	sayWitness: base
		.meta({ permission: 'pour.witness' })
		.input(pourInput.extend({ witnessId: z.uuid(), hasCome: z.boolean(), note: plainText(300).nullable() }))
		.output(pourAnswer),
	meetCondition: base
		.meta({ permission: 'pour.meet' })
		.input(pourInput.extend({ conditionId: z.uuid(), words: plainText(300) }))
		.output(pourAnswer),
};
