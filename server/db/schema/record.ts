import { sql } from 'drizzle-orm';
import { check, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { RecordAct } from '../../../shared/record/sealed-record.ts';
import { users } from './account.ts';
import { at, id, sha256, siteId } from './columns.ts';
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

/** Append-only, as the audit trail. `text` is the record's one canonical text, `sha256` that text's hash; each names the one before. */
export const sealedRecords = pgTable(
	'sealed_records',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		sequence: integer('sequence').notNull(),
		sha256: sha256('sha256').notNull(),
		previous: sha256('previous'),
		act: text('act').$type<RecordAct>().notNull(),
		/** What it is about, so that it can be listed without reading it. */
		pourId: uuid('pour_id').notNull(),
		holdPoint: text('hold_point').$type<'before-pour' | 'after-pour'>().notNull(),
		/** The record that this one withdraws, or takes the place of. */
		endsSha256: sha256('ends_sha256'),
		keySha256: sha256('key_sha256').notNull(),
		signedBy: uuid('signed_by')
			.notNull()
			.references(() => users.id),
		signedAt: at('signed_at').notNull(),
		text: text('text').notNull(),
	},
	(t) => [
		unique('sealed_records_sequence').on(t.siteId, t.sequence),
		unique('sealed_records_sha256').on(t.sha256),
		index('sealed_records_pour').on(t.siteId, t.pourId),
		check('sealed_records_hash', sql`${t.sha256} ~ '^[0-9a-f]{64}$'`),
		check('sealed_records_first_alone', sql`(${t.sequence} = 1) = (${t.previous} is null) and ${t.sequence} >= 1`),
	],
);

/** The public halves of all keys this server has signed with. The private ones lie in the data folder and nowhere else. */
export const signingKeys = pgTable(
	'signing_keys',
	{
		sha256: sha256('sha256').primaryKey(),
		publicKeyPem: text('public_key_pem').notNull(),
		publishedAt: at('published_at').notNull(),
		/** When another took its place. */
		retiredAt: at('retired_at'),
	},
	(t) => [check('signing_keys_hash', sql`${t.sha256} ~ '^[0-9a-f]{64}$'`)],
);
