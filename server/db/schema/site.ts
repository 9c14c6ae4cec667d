import { sql } from 'drizzle-orm';
import { boolean, check, foreignKey, index, integer, jsonb, pgEnum, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { roles } from '../../../shared/permissions.ts';
import {
	type CheckpointDensity,
	defaultCalendar,
	defaultCheckpointDensity,
	type WorkingCalendar,
} from '../../../shared/site/site-settings.ts';
import { users } from './account.ts';
import { at, id, siteId } from './columns.ts';

export const roleEnum = pgEnum('role', roles);
export const columnOrderEnum = pgEnum('column_order', ['PENZD', 'PNEZD']);
export const decisionRuleEnum = pgEnum('decision_rule', ['simple', 'guarded']);

export const sites = pgTable(
	'sites',
	{
		id: id(),
		name: text('name').notNull(),
		timeZone: text('time_zone').notNull(),
		/** The demo site says that it is invented. */
		isInvented: boolean('is_invented').notNull(),
		/** Fits need a second person's check before a pour rests on them. */
		isFitCheckedBySecond: boolean('is_fit_checked_by_second').notNull(),
		/** What was answered the last time an order of columns had to be asked. */
		columnOrder: columnOrderEnum('column_order'),
		/** Hours that deadlines count, in the site's zone. */
		calendar: jsonb('calendar').$type<WorkingCalendar>().notNull().default(defaultCalendar),
		/** What a new tolerance sheet begins with. */
		defaultDecision: decisionRuleEnum('default_decision').notNull().default('guarded'),
		checkpointDensity: jsonb('checkpoint_density').$type<CheckpointDensity>().notNull().default(defaultCheckpointDensity),
		/** A concession holds only with the owner's representative's consent. */
		needsOwnersConsent: boolean('needs_owners_consent').notNull().default(false),
		/** Who signs, adopts or issues has a second factor. */
		needsSecondFactor: boolean('needs_second_factor').notNull().default(false),
		/** Counts changes of the settings: who changes an older one is told. */
		settingsVersion: integer('settings_version').notNull().default(1),
		createdAt: at('created_at').notNull(),
	},
	(t) => [check('sites_name_said', sql`length(${t.name}) between 1 and 200`)],
);

export const companies = pgTable(
	'companies',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		name: text('name').notNull(),
	},
	(t) => [unique('companies_site_id').on(t.siteId, t.id), unique('companies_name').on(t.siteId, t.name)],
);

export const buildings = pgTable(
	'buildings',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		name: text('name').notNull(),
	},
	(t) => [unique('buildings_site_id').on(t.siteId, t.id), unique('buildings_name').on(t.siteId, t.name)],
);

/** One row a role; a person may hold several, never the owner's representative with another (the database refuses it). Leaving ends the row, past acts stay. */
export const memberships = pgTable(
	'memberships',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		role: roleEnum('role').notNull(),
		companyId: uuid('company_id'),
		/** Of a contractor: names and sends away the company's people on this site. */
		isLead: boolean('is_lead').notNull().default(false),
		/** A deputy's holder; a deputy's row has an end from the start. */
		deputyFor: uuid('deputy_for').references(() => users.id),
		fromAt: at('from_at').notNull(),
		leftAt: at('left_at'),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.companyId],
			foreignColumns: [companies.siteId, companies.id],
		}),
		uniqueIndex('memberships_once').on(t.siteId, t.userId, t.role).where(sql`${t.leftAt} is null`),
		index('memberships_site').on(t.siteId, t.userId),
		index('memberships_user').on(t.userId),
		check('memberships_contractor_has_company', sql`${t.role} <> 'contractor' or ${t.companyId} is not null`),
		check('memberships_lead_of_contractor', sql`not ${t.isLead} or ${t.role} = 'contractor'`),
		check('memberships_deputy_ends', sql`${t.deputyFor} is null or ${t.leftAt} is not null`),
	],
);

/** By mail, for one use. Only the hash of what the link holds is kept. Open: not accepted, not ended, not over. */
export const invitations = pgTable(
	'invitations',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		email: text('email').notNull(),
		roles: roleEnum('roles').array().notNull(),
		companyId: uuid('company_id'),
		isLead: boolean('is_lead').notNull(),
		/** Of a deputy: for whom, from when, until when. */
		deputyFor: uuid('deputy_for').references(() => users.id),
		fromAt: at('from_at'),
		untilAt: at('until_at'),
		tokenHash: text('token_hash').notNull(),
		invitedBy: uuid('invited_by')
			.notNull()
			.references(() => users.id),
		createdAt: at('created_at').notNull(),
		sentAt: at('sent_at').notNull(),
		expiresAt: at('expires_at').notNull(),
		acceptedAt: at('accepted_at'),
		acceptedBy: uuid('accepted_by').references(() => users.id),
		/** Withdrawn, or declined by whoever has the link. */
		endedAt: at('ended_at'),
		isDeclined: boolean('is_declined').notNull(),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.companyId], foreignColumns: [companies.siteId, companies.id] }),
		uniqueIndex('invitations_token').on(t.tokenHash),
		index('invitations_site').on(t.siteId),
		check('invitations_token_hashed', sql`${t.tokenHash} ~ '^[0-9a-f]{64}$'`),
		check('invitations_contractor_has_company', sql`not ('contractor' = any(${t.roles})) or ${t.companyId} is not null`),
		check('invitations_deputy_ends', sql`${t.deputyFor} is null or (${t.fromAt} is not null and ${t.untilAt} is not null)`),
		check('invitations_accepted_by', sql`(${t.acceptedAt} is null) = (${t.acceptedBy} is null)`),
	],
);
