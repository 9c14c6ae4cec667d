import { sql } from 'drizzle-orm';
import { check, index, integer, pgEnum, pgTable, text } from 'drizzle-orm/pg-core';
import { at, id } from './columns.ts';

/**
 * waiting: to be sent when its time comes. sending: handed to the service, until the lease ends. sent. failed: given up. uncertain: the
 * server died while a service that cannot recognise a second sending had it. void: written for nobody, so that asking takes as long.
 */
export const mailStateEnum = pgEnum('mail_state', ['waiting', 'sending', 'sent', 'failed', 'uncertain', 'void']);

/** The outbox. The id is the service's idempotency key. Text and HTML hold links that are secrets: they go when the mail has gone. */
export const mails = pgTable(
	'mails',
	{
		id: id(),
		toAddress: text('to_address').notNull(),
		subject: text('subject').notNull(),
		text: text('text'),
		html: text('html'),
		state: mailStateEnum('state').notNull(),
		tries: integer('tries').notNull(),
		/** When it may be sent; while it is being sent, when its lease ends. */
		dueAt: at('due_at').notNull(),
		lastFault: text('last_fault'),
		createdAt: at('created_at').notNull(),
		endedAt: at('ended_at'),
	},
	(t) => [
		index('mails_due').on(t.state, t.dueAt),
		check('mails_said', sql`${t.state} not in ('waiting', 'sending') or (${t.text} is not null and ${t.html} is not null)`),
	],
);
