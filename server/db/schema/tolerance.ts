import { sql } from 'drizzle-orm';
import { check, integer, jsonb, pgEnum, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import type { ToleranceSheet } from '../../../shared/tolerance/sheet-schema.ts';
import { users } from './account.ts';
import { at, id, sha256, siteId } from './columns.ts';
import { sites } from './site.ts';

export const sheetStateEnum = pgEnum('sheet_state', ['draft', 'issued', 'superseded']);

export const sheets = pgTable(
	'sheets',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		name: text('name').notNull(),
		revision: integer('revision').notNull(),
		state: sheetStateEnum('state').notNull(),
		sheet: jsonb('sheet').$type<ToleranceSheet>().notNull(),
		contentSha256: sha256('content_sha256').notNull(),
		/** Said at the issue, repeated at every later sign-off. */
		issueReason: text('issue_reason'),
		issuedBy: uuid('issued_by').references(() => users.id),
		issuedAt: at('issued_at'),
	},
	(t) => [
		unique('sheets_site_id').on(t.siteId, t.id),
		unique('sheets_revision').on(t.siteId, t.revision),
		uniqueIndex('sheets_one_issued').on(t.siteId).where(sql`state = 'issued'`),
		check('sheets_issued_says_who', sql`${t.state} = 'draft' or (${t.issuedBy} is not null and ${t.issuedAt} is not null)`),
	],
);
