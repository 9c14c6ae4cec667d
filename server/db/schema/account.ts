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
		/** When, by which program and from which network address it began; null where it began before these were kept. */
		createdAt: at('created_at'),
		userAgent: text('user_agent'),
		address: text('address'),
	},
	(t) => [index('sessions_user').on(t.userId), check('sessions_id_hashed', sql`${t.id} ~ '^[0-9a-f]{64}$'`)],
);

/** One a request. `userId` is null where nobody has the address: asking leaves the same trace either way. Only the link's hash is kept. */
export const passwordResets = pgTable(
	'password_resets',
	{
		id: id(),
		userId: uuid('user_id').references(() => users.id),
		tokenHash: text('token_hash').notNull(),
		createdAt: at('created_at').notNull(),
		expiresAt: at('expires_at').notNull(),
		usedAt: at('used_at'),
	},
	(t) => [
		uniqueIndex('password_resets_token').on(t.tokenHash),
		index('password_resets_user').on(t.userId),
		check('password_resets_token_hashed', sql`${t.tokenHash} ~ '^[0-9a-f]{64}$'`),
	],
);
