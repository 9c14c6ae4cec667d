import { sql } from 'drizzle-orm';
import { boolean, check, index, integer, jsonb, pgEnum, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import type { Preferences } from '../../../shared/account/preferences.ts';
import { at, id } from './columns.ts';

export const users = pgTable(
	'users',
	{
		id: id(),
		email: text('email').notNull(),
		name: text('name').notNull(),
		passwordHash: text('password_hash').notNull(),
		/** How the person wants figures, dates and colours; null: nothing chosen. */
		preferences: jsonb('preferences').$type<Preferences>(),
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
		/** Until when the person counts as just having proved who they are; null: not since the session began. */
		freshUntil: at('fresh_until'),
		/** A second factor was shown in this session: a code of an app, a recovery code, or a passkey. */
		hasSecondFactor: boolean('has_second_factor').notNull().default(false),
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

/** The secret of a person's app for one-time codes (RFC 6238). It opens nothing before a first code confirmed it. */
export const totps = pgTable('totps', {
	userId: uuid('user_id')
		.primaryKey()
		.references(() => users.id),
	/** It must be read to check a code, so it cannot be a hash: sealed for this person under a key of the data folder. */
	secret: text('secret').notNull(),
	createdAt: at('created_at').notNull(),
	confirmedAt: at('confirmed_at'),
	/** The newest time step a code was taken of: the same code, or an older one, opens nothing. */
	lastStep: integer('last_step').notNull(),
});

/** One row a code; each opens once. */
export const recoveryCodes = pgTable(
	'recovery_codes',
	{
		id: id(),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		codeHash: text('code_hash').notNull(),
		usedAt: at('used_at'),
	},
	(t) => [uniqueIndex('recovery_codes_hash').on(t.codeHash), index('recovery_codes_user').on(t.userId)],
);

/** A person's passkeys (WebAuthn level 2): only what checks a signature, nothing that makes one. */
export const passkeys = pgTable(
	'passkeys',
	{
		/** The credential's own id, base64url. */
		id: text('id').primaryKey(),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		name: text('name').notNull(),
		/** COSE key, base64url. */
		publicKey: text('public_key').notNull(),
		counter: integer('counter').notNull(),
		transports: text('transports').array().notNull(),
		createdAt: at('created_at').notNull(),
		lastUsedAt: at('last_used_at'),
	},
	(t) => [index('passkeys_user').on(t.userId)],
);

export const challengeKindEnum = pgEnum('challenge_kind', ['add', 'sign-in', 'again']);

/** What a passkey is asked to sign, once. */
export const challenges = pgTable('challenges', {
	id: id(),
	kind: challengeKindEnum('kind').notNull(),
	/** Null where nobody has said who they are yet. */
	userId: uuid('user_id').references(() => users.id),
	challenge: text('challenge').notNull(),
	expiresAt: at('expires_at').notNull(),
});

export const signInStepEnum = pgEnum('sign_in_step', ['mailed-code', 'second-factor']);

/** A sign-in half done: a code is awaited. `userId` is null where nobody has the address: the same trace either way. */
export const signInSteps = pgTable(
	'sign_in_steps',
	{
		id: id(),
		kind: signInStepEnum('kind').notNull(),
		userId: uuid('user_id').references(() => users.id),
		/** Of what this browser alone holds. */
		tokenHash: text('token_hash').notNull(),
		/** Of token and mailed code together: who reads the table can try no codes. */
		codeHash: text('code_hash'),
		isOwnDevice: boolean('is_own_device').notNull(),
		triesLeft: integer('tries_left').notNull(),
		expiresAt: at('expires_at').notNull(),
		usedAt: at('used_at'),
	},
	(t) => [
		uniqueIndex('sign_in_steps_token').on(t.tokenHash),
		index('sign_in_steps_user').on(t.userId),
		check('sign_in_steps_hashed', sql`${t.tokenHash} ~ '^[0-9a-f]{64}$'`),
	],
);
