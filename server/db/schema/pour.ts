import { sql } from 'drizzle-orm';
import { boolean, check, foreignKey, jsonb, pgEnum, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { users } from './account.ts';
import { at, id, siteId } from './columns.ts';
import { models } from './model.ts';
import { companies, sites } from './site.ts';

export const pourStateEnum = pgEnum('pour_state', ['planned', 'concreting', 'cast', 'cast-in-part']);
export const holdPointKindEnum = pgEnum('hold_point_kind', ['before-pour', 'after-pour']);
export const holdPointStateEnum = pgEnum('hold_point_state', [
	'open',
	'called',
	'submitted',
	'more-asked',
	'released',
	'released-with-conditions',
	'refused',
]);

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
	dueAt: at('due_at'),
	isMet: boolean('is_met').notNull(),
});
