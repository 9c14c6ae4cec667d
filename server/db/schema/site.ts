import { sql } from 'drizzle-orm';
import { boolean, check, foreignKey, index, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { roles } from '../../../shared/permissions.ts';
import { users } from './account.ts';
import { at, id, siteId } from './columns.ts';

export const roleEnum = pgEnum('role', roles);
export const columnOrderEnum = pgEnum('column_order', ['PENZD', 'PNEZD']);

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

/** One row a role; a person may hold several, never the owner's representative with another (kept by the policy). Leaving ends the row, past acts stay. */
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
		fromAt: at('from_at').notNull(),
		leftAt: at('left_at'),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.companyId],
			foreignColumns: [companies.siteId, companies.id],
		}),
		unique('memberships_once').on(t.siteId, t.userId, t.role),
		index('memberships_user').on(t.userId),
		check('memberships_contractor_has_company', sql`${t.role} <> 'contractor' or ${t.companyId} is not null`),
	],
);
