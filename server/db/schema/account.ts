import { sql } from 'drizzle-orm';
import { check, index, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { at, id } from './columns.ts';

export const users = pgTable(
	'users',
	{
		id: id(),
		email: text('email').notNull(),
		name: text('name').notNull(),
		passwordHash: text('password_hash').notNull(),
		createdAt: at('created_at').notNull(),
	},
	(t) => [uniqueIndex('users_email').on(sql`lower(${t.email})`), check('users_name_said', sql`length(${t.name}) between 1 and 200`)],
);

/** `id` is the SHA-256 of what the cookie holds: who reads the table is not signed in. */
export const sessions = pgTable(
	'sessions',
	{
		id: text('id').primaryKey(),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		expiresAt: at('expires_at').notNull(),
	},
	(t) => [index('sessions_user').on(t.userId), check('sessions_id_hashed', sql`${t.id} ~ '^[0-9a-f]{64}$'`)],
);
