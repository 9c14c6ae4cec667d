import { index, jsonb, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { users } from './account.ts';
import { at, id } from './columns.ts';
import { sites } from './site.ts';

/** Append-only: the database refuses update and delete (see the migration). Who did what, as what, when. */
export const auditEntries = pgTable(
	'audit_entries',
	{
		id: id(),
		siteId: uuid('site_id').references(() => sites.id),
		userId: uuid('user_id').references(() => users.id),
		roles: text('roles').array().notNull(),
		kind: text('kind').notNull(),
		subjectId: text('subject_id'),
		/** The network address the act came from; null where a job or the server itself acted. */
		address: text('address'),
		data: jsonb('data').$type<Record<string, unknown>>().notNull(),
		at: at('at').notNull(),
	},
	(t) => [index('audit_entries_site').on(t.siteId, t.at), index('audit_entries_subject').on(t.siteId, t.subjectId)],
);
