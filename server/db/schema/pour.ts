import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	foreignKey,
	index,
	jsonb,
	pgEnum,
	pgTable,
	primaryKey,
	text,
	unique,
	uniqueIndex,
	uuid,
} from 'drizzle-orm/pg-core';
import { holdPointKinds, holdPointStates, pourStates } from '../../../shared/pour/pour-life.ts';
import { users } from './account.ts';
import { at, id, siteId } from './columns.ts';
import { models } from './model.ts';
import { sealedRecords } from './record.ts';
import { companies, sites } from './site.ts';

export const pourStateEnum = pgEnum('pour_state', pourStates);
export const holdPointKindEnum = pgEnum('hold_point_kind', holdPointKinds);
export const holdPointStateEnum = pgEnum('hold_point_state', holdPointStates);

/** The elements concreted together. */
export const pours = pgTable(
	'pours',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		number: text('number').notNull(),
		name: text('name').notNull(),
		companyId: uuid('company_id').notNull(),
		plannedAt: at('planned_at'),
		state: pourStateEnum('state').notNull(),
		concretingFrom: at('concreting_from'),
		concretingTo: at('concreting_to'),
		/** The pour that was cast in part and left this one its rest. */
		partOf: uuid('part_of'),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.companyId],
			foreignColumns: [companies.siteId, companies.id],
		}),
		unique('pours_site_id').on(t.siteId, t.id),
		unique('pours_number').on(t.siteId, t.number),
	],
);

/** By GlobalId, so that a pour outlives a revision. An element may belong to another company than the pour. */
export const pourElements = pgTable(
	'pour_elements',
	{
		siteId: siteId(),
		pourId: uuid('pour_id').notNull(),
		modelId: uuid('model_id').notNull(),
		globalId: text('global_id').notNull(),
		companyId: uuid('company_id'),
	},
	(t) => [
		primaryKey({ columns: [t.pourId, t.modelId, t.globalId] }),
		foreignKey({
			columns: [t.siteId, t.pourId],
			foreignColumns: [pours.siteId, pours.id],
		}),
		foreignKey({
			columns: [t.siteId, t.modelId],
			foreignColumns: [models.siteId, models.id],
		}),
		foreignKey({
			columns: [t.siteId, t.companyId],
			foreignColumns: [companies.siteId, companies.id],
		}),
	],
);

/** Two a pour: before the concrete and after it. */
export const holdPoints = pgTable(
	'hold_points',
	{
		id: id(),
		siteId: siteId(),
		pourId: uuid('pour_id').notNull(),
		kind: holdPointKindEnum('kind').notNull(),
		state: holdPointStateEnum('state').notNull(),
		/** The hold-point list: question and answer. */
		list: jsonb('list').$type<{ question: string; answer: string | null }[]>().notNull(),
		readyFrom: at('ready_from'),
		calledBy: uuid('called_by').references(() => users.id),
		calledAt: at('called_at'),
		submittedBy: uuid('submitted_by').references(() => users.id),
		submittedAt: at('submitted_at'),
		statement: text('statement'),
		signedBy: uuid('signed_by').references(() => users.id),
		signedAt: at('signed_at'),
		/** The sealed record of what was signed last. */
		recordId: uuid('record_id').references(() => sealedRecords.id),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.pourId],
			foreignColumns: [pours.siteId, pours.id],
		}),
		unique('hold_points_kind').on(t.pourId, t.kind),
		check(
			'hold_points_signed_says_who',
			sql`${t.state} not in ('released', 'released-with-conditions', 'refused') or (${t.signedBy} is not null and ${t.signedAt} is not null and ${t.statement} is not null)`,
		),
	],
);

/** What was answered to a condition is kept for the record. */
export const holdPointConditions = pgTable('hold_point_conditions', {
	id: id(),
	holdPointId: uuid('hold_point_id')
		.notNull()
		.references(() => holdPoints.id),
	text: text('text').notNull(),
	ownerId: uuid('owner_id').references(() => users.id),
	/** Who sees to it, in words; what shows that it was done. */
	owner: text('owner').notNull().default(''),
	proof: text('proof').notNull().default(''),
	dueAt: at('due_at'),
	isMet: boolean('is_met').notNull(),
	metBy: uuid('met_by').references(() => users.id),
	metAt: at('met_at'),
	metWords: text('met_words'),
});

/** Something one may come and see: notice is given; whoever was told came or did not come. It holds up nothing. */
export const witnessPoints = pgTable(
	'witness_points',
	{
		id: id(),
		siteId: siteId(),
		pourId: uuid('pour_id').notNull(),
		what: text('what').notNull(),
		at: at('at').notNull(),
		noticeBy: uuid('notice_by')
			.notNull()
			.references(() => users.id),
		noticeAt: at('notice_at').notNull(),
		/** Null: not said yet. */
		hasCome: boolean('has_come'),
		note: text('note'),
		saidBy: uuid('said_by').references(() => users.id),
		saidAt: at('said_at'),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.pourId], foreignColumns: [pours.siteId, pours.id] }),
		index('witness_points_pour').on(t.pourId),
	],
);

/** "Hold: do not pour": something touched a released pour before it was cast. One stands at a time. */
export const pourHolds = pgTable(
	'pour_holds',
	{
		id: id(),
		siteId: siteId(),
		pourId: uuid('pour_id').notNull(),
		reasons: jsonb('reasons').$type<string[]>().notNull(),
		raisedAt: at('raised_at').notNull(),
		/** Who withdrew the release; null where the server found what touches it. */
		raisedBy: uuid('raised_by').references(() => users.id),
		endedAt: at('ended_at'),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.pourId], foreignColumns: [pours.siteId, pours.id] }),
		uniqueIndex('pour_holds_one_stands').on(t.pourId).where(sql`ended_at is null`),
	],
);

export const pourHoldsSeen = pgTable(
	'pour_holds_seen',
	{
		holdId: uuid('hold_id')
			.notNull()
			.references(() => pourHolds.id),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		seenAt: at('seen_at').notNull(),
	},
	(t) => [primaryKey({ columns: [t.holdId, t.userId] })],
);
