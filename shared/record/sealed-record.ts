import { z } from 'zod';
import { deviationSchema } from '../check/check-schema.ts';
import { requirement } from '../model/requirement.ts';
import { decisionRule, stage } from '../tolerance/sheet-schema.ts';

/**
 * A sealed record: what was signed, exactly as it was shown, with all that is needed to judge it again without the server.
 * Units   millimetres for deviations, limits and U; metres, design frame, for places; times in UTC (ISO 8601).
 * Form    canonical JSON (RFC 8785). The record's SHA-256 is that of its whole canonical text, seal included, so that
 *         `sha256sum` of the file is the head; the signature (Ed25519, RFC 8032) is over the canonical text of `body`.
 */

export const recordForm = 'batterboard-record-1';
export const chainForm = 'batterboard-chain-1';

/** "The result depends on …": stands on every record. */
export const recordCaution =
	'The result depends on the control, the survey and the design supplied. It supports and does not replace the judgement of the licensed surveyor and the engineer of record, and local codes and the contract govern. It is no statement about strength or safety.';

export const sha256Text = z.string().regex(/^[0-9a-f]{64}$/, 'a SHA-256 in lower-case hexadecimal');
const moment = z.iso.datetime();
const text = z.string().max(4000);

export const recordedElement = z.strictObject({
	modelId: z.uuid(),
	modelName: text,
	globalId: text,
	class: text,
	/** What people call it. */
	mark: text,
	title: text,
	storey: text,
	/** Where it belongs to another company than the pour. */
	company: text.nullable(),
	/** Of its place, shape and checkpoints in the design: a later revision that leaves it alone gives the same. */
	designSha256: sha256Text,
});
export type RecordedElement = z.infer<typeof recordedElement>;

/** One checkpoint with every figure its verdict follows from. */
export const recordedCheckpoint = z.strictObject({
	modelId: z.uuid(),
	checkpointId: text,
	globalId: text,
	label: text,
	characteristic: deviationSchema.shape.characteristic,
	requirement,
	place: deviationSchema.shape.place,
	direction: deviationSchema.shape.direction,
	/** Number of the published check it was taken from; null where none measured it. */
	check: z.number().int().nullable(),
	decision: decisionRule.nullable(),
	rule: text.nullable(),
	measured: deviationSchema.shape.measured,
	notMeasuredReason: text.nullable(),
	deviationMm: z.number().nullable(),
	offsetMm: deviationSchema.shape.offsetMm,
	covarianceMm2: deviationSchema.shape.covarianceMm2,
	expandedUncertaintyMm: z.number().nullable(),
	limitsMm: deviationSchema.shape.limitsMm,
	boxYawRad: z.number().nullable(),
	verdict: deviationSchema.shape.verdict,
	beyondMm: z.number().nullable(),
	conformity: z.number().nullable(),
});
export type RecordedCheckpoint = z.infer<typeof recordedCheckpoint>;

export const recordedFit = z.strictObject({
	number: z.number().int(),
	setup: text,
	kind: text,
	/** "adopted" while it is the one in use. */
	state: text,
	preparedBy: text,
	adoptedBy: text,
	adoptedReason: text,
	/** The second person; null where none was asked for, which the site's rule says. */
	checkedBy: text.nullable(),
	surveyorInCharge: z.strictObject({ name: text, licence: text, jurisdiction: text }).nullable(),
	inputsSha256: sha256Text,
	controlFileSha256: sha256Text,
});

/** A published check that one of the checkpoints was taken from, by its inputs. */
export const recordedCheck = z.strictObject({
	number: z.number().int(),
	stage,
	engineVersion: text,
	inputsSha256: sha256Text,
	publishedBy: text.nullable(),
	publishedAt: moment.nullable(),
	survey: z.strictObject({ number: z.number().int(), name: text, surveyedOn: text, observer: text, fileSha256: sha256Text }),
	model: z.strictObject({ name: text, revision: z.number().int(), fileSha256: sha256Text }),
	sheet: z.strictObject({
		name: text,
		revision: z.number().int(),
		decision: decisionRule,
		contentSha256: sha256Text,
		issuedBy: text.nullable(),
		/** Said at the issue, repeated at every later sign-off. */
		issueReason: text.nullable(),
	}),
	fits: z.array(recordedFit).max(1000),
	findings: z.array(z.strictObject({ code: text, message: text })).max(2000),
});
export type RecordedCheck = z.infer<typeof recordedCheck>;

export const recordedFlag = z.strictObject({
	flagId: z.uuid(),
	modelId: z.uuid(),
	globalId: text,
	mark: text,
	characteristic: text,
	state: text,
	/** How it was closed, in words. */
	outcome: text,
	/** Of a concession: why, on which conditions, up to how many millimetres; by whom. */
	concession: z
		.strictObject({ upToMm: z.number(), reason: text, conditions: text.nullable(), decidedBy: text.nullable(), consentBy: text.nullable() })
		.nullable(),
});
export type RecordedFlag = z.infer<typeof recordedFlag>;

export const recordedCondition = z.strictObject({
	text,
	/** Who sees to it, by when, and what shows that it was done. */
	owner: text,
	dueAt: moment.nullable(),
	proof: text,
});

/** What the signer was shown: everything of a decision but the signer's own words. Its SHA-256 goes with the request to sign. */
export const shownPour = z.strictObject({
	pour: z.strictObject({
		pourId: z.uuid(),
		number: text,
		name: text,
		company: text,
		plannedAt: moment.nullable(),
		holdPoint: z.enum(['before-pour', 'after-pour']),
		calledBy: text.nullable(),
		submittedBy: text.nullable(),
		list: z.array(z.strictObject({ question: text, answer: text.nullable() })).max(200),
		witnessed: z.array(z.strictObject({ what: text, at: moment, came: z.boolean().nullable(), note: text.nullable() })).max(100),
	}),
	/** A second person checks fits on this site. */
	isFitCheckedBySecond: z.boolean(),
	isReady: z.boolean(),
	/** Why it is ready or not, sentence by sentence. */
	readiness: z.array(text).max(5000),
	/** What is newer than the figures and touches nothing of this pour. */
	carriedOver: z.array(text).max(100),
	elements: z.array(recordedElement).max(20_000),
	checkpoints: z.array(recordedCheckpoint).max(100_000),
	leftOut: z
		.array(z.strictObject({ modelId: z.uuid(), checkpointId: text, globalId: text, label: text, reason: text, by: text }))
		.max(100_000),
	/** What the concrete itself makes and this hold point, before it, does not ask for; absent where there is none. */
	afterConcrete: z
		.array(z.strictObject({ modelId: z.uuid(), checkpointId: text, globalId: text, label: text }))
		.max(100_000)
		.optional(),
	flags: z.array(recordedFlag).max(20_000),
	checks: z.array(recordedCheck).max(500),
});
export type ShownPour = z.infer<typeof shownPour>;

const signer = z.strictObject({
	userId: z.uuid(),
	name: text,
	as: z.array(text).max(10),
	deputyFor: text.nullable(),
	/** How the person was recognised: "password again at …". */
	recognised: text,
});
export type RecordSigner = z.infer<typeof signer>;

const common = {
	recordId: z.uuid(),
	/** Of the site's chain, from 1 without a gap. */
	sequence: z.number().int().positive(),
	/** SHA-256 of the record before; null of the first. */
	previous: sha256Text.nullable(),
	site: z.strictObject({ siteId: z.uuid(), name: text, timeZone: text, isInvented: z.boolean() }),
	signedAt: moment,
	signer,
	statement: text,
	engineVersion: text,
	caution: text,
};

export const decisionActs = ['released', 'released-with-conditions', 'refused'] as const;
export const decisionBody = z.strictObject({
	...common,
	act: z.enum(decisionActs),
	/** The record of the same hold point that this one takes the place of. */
	supersedes: sha256Text.nullable(),
	conditions: z.array(recordedCondition).max(100),
	shown: shownPour,
});
export type DecisionBody = z.infer<typeof decisionBody>;

export const withdrawalBody = z.strictObject({
	...common,
	act: z.literal('withdrawn'),
	/** The record that no longer holds. */
	withdraws: sha256Text,
	pour: z.strictObject({ pourId: z.uuid(), number: text, name: text, holdPoint: z.enum(['before-pour', 'after-pour']) }),
});
export type WithdrawalBody = z.infer<typeof withdrawalBody>;

export const recordBody = z.discriminatedUnion('act', [decisionBody, withdrawalBody]);
export type RecordBody = z.infer<typeof recordBody>;
export type RecordAct = RecordBody['act'];

export const sealedRecord = z.strictObject({
	form: z.literal(recordForm),
	body: recordBody,
	seal: z.strictObject({
		algorithm: z.literal('Ed25519'),
		/** SHA-256 of the public key's SubjectPublicKeyInfo (DER): a pointer to the key, no proof of it. */
		keySha256: sha256Text,
		/** 64 bytes, lower-case hexadecimal. */
		signature: z.string().regex(/^[0-9a-f]{128}$/, 'an Ed25519 signature of 64 bytes in lower-case hexadecimal'),
	}),
});
export type SealedRecord = z.infer<typeof sealedRecord>;

export const recordChain = z.strictObject({ form: z.literal(chainForm), records: z.array(sealedRecord).min(1).max(100_000) });
export type RecordChain = z.infer<typeof recordChain>;
