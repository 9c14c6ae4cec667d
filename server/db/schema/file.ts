import { sql } from 'drizzle-orm';
import { bigint, check, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { users } from './account.ts';
import { at, sha256, siteId } from './columns.ts';
import { sites } from './site.ts';

/** Bytes are kept once, named by their hash; the rows that use them name the hash. */
export const files = pgTable(
	'files',
	{
		sha256: sha256('sha256').primaryKey(),
		bytes: bigint('bytes', { mode: 'number' }).notNull(),
		keptAt: at('kept_at').notNull(),
	},
	(t) => [check('files_hash', sql`${t.sha256} ~ '^[0-9a-f]{64}$'`)],
);

/** A finished or unfinished upload; whoever began it may use it, once. */
export const uploads = pgTable('uploads', {
	id: text('id').primaryKey(),
	siteId: siteId().references(() => sites.id),
	userId: uuid('user_id')
		.notNull()
		.references(() => users.id),
	fileName: text('file_name').notNull(),
	bytes: bigint('bytes', { mode: 'number' }).notNull(),
	begunAt: at('begun_at').notNull(),
	finishedAt: at('finished_at'),
	/** Set when the bytes have been put into the store. */
	sha256: sha256('sha256').references(() => files.sha256),
	usedAt: at('used_at'),
});
