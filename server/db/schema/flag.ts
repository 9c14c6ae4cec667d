import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	foreignKey,
	index,
	integer,
	jsonb,
	pgEnum,
	pgTable,
	primaryKey,
	text,
	unique,
	uniqueIndex,
	uuid,
} from 'drizzle-orm/pg-core';
import type { FlagLife } from '../../../shared/flag/flag-life.ts';
import {
	closingCauses,
	type FlagAnswer,
	type FlagDecision,
	flagStates,
	flagVerdicts,
	lapseCauses,
	type WorstDeviation,
} from '../../../shared/flag/flag-schema.ts';
import { characteristics } from '../../../shared/tolerance/sheet-schema.ts';
import { users } from './account.ts';
import { checks } from './check.ts';
import { at, id, millimetres, sha256, siteId } from './columns.ts';
import { files } from './file.ts';
import { models } from './model.ts';
import { companies } from './site.ts';
import { surveys } from './survey.ts';

export const flagStateEnum = pgEnum('flag_state', flagStates);
export const flagVerdictEnum = pgEnum('flag_verdict', flagVerdicts);
export const flagKindEnum = pgEnum('flag_kind', characteristics);
export const flagWithEnum = pgEnum('flag_with', ['contractor', 'engineers']);
export const closingCauseEnum = pgEnum('closing_cause', closingCauses);
export const lapseCauseEnum = pgEnum('lapse_cause', lapseCauses);
export const photoFormatEnum = pgEnum('photo_format', ['jpeg', 'png', 'heic']);

/** One element and kind that is off or too close to call. By GlobalId, so that it outlives a revision; one that has not lapsed at a time. */
export const flags = pgTable(
	'flags',
	{
		id: id(),
		siteId: siteId(),
		number: integer('number').notNull(),
		modelId: uuid('model_id').notNull(),
		globalId: text('global_id').notNull(),
		kind: flagKindEnum('kind').notNull(),
		/** The element as it was called when it was flagged last. */
		mark: text('mark').notNull(),
		title: text('title').notNull(),
		/** Whose pour it is; null where it is in none. */
		companyId: uuid('company_id'),
		state: flagStateEnum('state').notNull(),
		isWith: flagWithEnum('is_with').notNull(),
		verdict: flagVerdictEnum('verdict').notNull(),
		worstMm: millimetres('worst_mm').notNull(),
		isInsideAlone: boolean('is_inside_alone').notNull(),
		/** The worst of its places with its sign, limits and U; null: flagged before it was kept. */
		worst: jsonb('worst').$type<WorstDeviation>(),
		/** The check that its figures come from. */
		checkId: uuid('check_id').notNull(),
		/** The check that raised it: with that one withdrawn it lapses. */
		raisedCheckId: uuid('raised_check_id').notNull(),
		raisedAt: at('raised_at').notNull(),
		round: integer('round').notNull(),
		answerBy: at('answer_by'),
		timeAsked: at('time_asked'),
		answer: jsonb('answer').$type<FlagAnswer>(),
		decision: jsonb('decision').$type<FlagDecision>(),
		isDecidedWithoutAnswer: boolean('is_decided_without_answer').notNull(),
		isConsentAwaited: boolean('is_consent_awaited').notNull(),
		closedOn: closingCauseEnum('closed_on'),
		lapsedBecause: lapseCauseEnum('lapsed_because'),
		/** In words, which: the check's reason, the revision, the sheet. */
		lapsedWords: text('lapsed_words'),
		putRightAt: at('put_right_at'),
		/** Counts every change: who acts names the one it saw. */
		version: integer('version').notNull(),
		changedAt: at('changed_at').notNull(),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
		foreignKey({ columns: [t.siteId, t.companyId], foreignColumns: [companies.siteId, companies.id] }),
		foreignKey({ columns: [t.siteId, t.checkId], foreignColumns: [checks.siteId, checks.id] }),
		foreignKey({ columns: [t.siteId, t.raisedCheckId], foreignColumns: [checks.siteId, checks.id] }),
		unique('flags_site_id').on(t.siteId, t.id),
		unique('flags_number').on(t.siteId, t.number),
		uniqueIndex('flags_one_alive').on(t.siteId, t.modelId, t.globalId, t.kind).where(sql`state <> 'lapsed'`),
		index('flags_check').on(t.checkId),
		check('flags_closed_says_on_what', sql`${t.state} <> 'closed' or ${t.closedOn} is not null`),
		check('flags_lapsed_says_why', sql`${t.state} <> 'lapsed' or (${t.lapsedBecause} is not null and ${t.lapsedWords} is not null)`),
		check('flags_answered_has_answer', sql`${t.state} <> 'answered' or ${t.answer} is not null`),
		check('flags_decided_has_decision', sql`${t.state} not in ('decided', 'put-right') or ${t.decision} is not null`),
		check('flags_clock_is_contractors', sql`${t.isWith} = 'contractor' or ${t.answerBy} is null`),
	],
);

/** Every answer that was given, the changed ones too. */
export const flagAnswers = pgTable(
	'flag_answers',
	{
		id: id(),
		siteId: siteId(),
		flagId: uuid('flag_id').notNull(),
		round: integer('round').notNull(),
		answer: jsonb('answer').$type<FlagAnswer>().notNull(),
		answeredBy: uuid('answered_by')
			.notNull()
			.references(() => users.id),
		answeredAt: at('answered_at').notNull(),
	},
	(t) => [foreignKey({ columns: [t.siteId, t.flagId], foreignColumns: [flags.siteId, flags.id] }), index('flag_answers_flag').on(t.flagId)],
);

/** Every decision that was made, and on a concession what the owner's representative said to it. */
export const flagDecisions = pgTable(
	'flag_decisions',
	{
		id: id(),
		siteId: siteId(),
		flagId: uuid('flag_id').notNull(),
		round: integer('round').notNull(),
		decision: jsonb('decision').$type<FlagDecision>().notNull(),
		isWithoutAnswer: boolean('is_without_answer').notNull(),
		/** The figures it was made on. */
		checkId: uuid('check_id').notNull(),
		worstMm: millimetres('worst_mm').notNull(),
		decidedBy: uuid('decided_by')
			.notNull()
			.references(() => users.id),
		decidedAt: at('decided_at').notNull(),
		isConsentGiven: boolean('is_consent_given'),
		consentReason: text('consent_reason'),
		consentBy: uuid('consent_by').references(() => users.id),
		consentAt: at('consent_at'),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.flagId], foreignColumns: [flags.siteId, flags.id] }),
		index('flag_decisions_flag').on(t.flagId),
		check(
			'flag_decisions_consent_says_who',
			sql`${t.isConsentGiven} is null or (${t.consentBy} is not null and ${t.consentAt} is not null)`,
		),
	],
);

export const flagComments = pgTable(
	'flag_comments',
	{
		id: id(),
		siteId: siteId(),
		flagId: uuid('flag_id').notNull(),
		text: text('text').notNull(),
		saidBy: uuid('said_by')
			.notNull()
			.references(() => users.id),
		saidAt: at('said_at').notNull(),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.flagId], foreignColumns: [flags.siteId, flags.id] }),
		index('flag_comments_flag').on(t.flagId),
	],
);

/** The original by its hash, never changed; the shown copy is the same picture without where and with what it was taken. */
export const flagPhotos = pgTable(
	'flag_photos',
	{
		id: id(),
		siteId: siteId(),
		flagId: uuid('flag_id').notNull(),
		originalSha256: sha256('original_sha256')
			.notNull()
			.references(() => files.sha256),
		/** Null: of a format that no program here can copy without its place; then only the original's hash is shown. */
		shownSha256: sha256('shown_sha256').references(() => files.sha256),
		format: photoFormatEnum('format').notNull(),
		widthPx: integer('width_px').notNull(),
		heightPx: integer('height_px').notNull(),
		addedBy: uuid('added_by')
			.notNull()
			.references(() => users.id),
		addedAt: at('added_at').notNull(),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.flagId], foreignColumns: [flags.siteId, flags.id] }),
		unique('flag_photos_once').on(t.flagId, t.originalSha256),
	],
);

/**
 * What a person did to a flag and how the flag stood before, so that the same act sent twice is one, and can be taken back for minutes. The id
 * of an act is the sender's; several flags of one act share it.
 */
export const flagActs = pgTable(
	'flag_acts',
	{
		actId: uuid('act_id').notNull(),
		siteId: siteId(),
		flagId: uuid('flag_id').notNull(),
		kind: text('kind').notNull(),
		actorId: uuid('actor_id')
			.notNull()
			.references(() => users.id),
		actedAt: at('acted_at').notNull(),
		/** The flag's version after it: any other now says that something has been done since. */
		versionAfter: integer('version_after').notNull(),
		/** Its life before. */
		before: jsonb('before').$type<FlagLife>().notNull(),
		takenBackAt: at('taken_back_at'),
	},
	(t) => [
		primaryKey({ columns: [t.actId, t.flagId] }),
		foreignKey({ columns: [t.siteId, t.flagId], foreignColumns: [flags.siteId, flags.id] }),
		index('flag_acts_flag').on(t.flagId, t.actorId),
	],
);

/**
 * Points of a contractor's own, brought with a contest: the file as it came. A site engineer stores it as a survey like any other and names that
 * survey here; its figures are shown beside the flag's, never in their place.
 */
export const broughtPoints = pgTable(
	'brought_points',
	{
		id: id(),
		siteId: siteId(),
		flagId: uuid('flag_id').notNull(),
		companyId: uuid('company_id').notNull(),
		fileName: text('file_name').notNull(),
		fileSha256: sha256('file_sha256')
			.notNull()
			.references(() => files.sha256),
		broughtBy: uuid('brought_by')
			.notNull()
			.references(() => users.id),
		broughtAt: at('brought_at').notNull(),
		surveyId: uuid('survey_id'),
		storedBy: uuid('stored_by').references(() => users.id),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.flagId], foreignColumns: [flags.siteId, flags.id] }),
		foreignKey({ columns: [t.siteId, t.companyId], foreignColumns: [companies.siteId, companies.id] }),
		foreignKey({ columns: [t.siteId, t.surveyId], foreignColumns: [surveys.siteId, surveys.id] }),
		unique('brought_points_once').on(t.flagId, t.fileSha256),
		check('brought_points_stored_says_who', sql`${t.surveyId} is null or ${t.storedBy} is not null`),
	],
);
