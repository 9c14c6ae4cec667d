import { sql } from 'drizzle-orm';
import { check, index, integer, jsonb, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { NoticeKind, NoticeRod } from '../../../shared/mail/notice.ts';
import { users } from './account.ts';
import { at, id, siteId } from './columns.ts';
import { sites } from './site.ts';

/**
 * waiting: to be sent when its time comes. sending: handed to the service, until the lease ends. sent. failed: given up. uncertain: the
 * server died while a service that cannot recognise a second sending had it. void: written for nobody, so that asking takes as long.
 */
export const mailStateEnum = pgEnum('mail_state', ['waiting', 'sending', 'sent', 'failed', 'uncertain', 'void']);

export const noticeEndEnum = pgEnum('notice_end', ['mailed', 'taken-back', 'not-wished', 'left-the-site']);

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

/**
 * What waits to be told to one person, before it is a mail. Notices of one act share its id, so that the act can be taken back while none
 * has left. One notice a person, act and thing.
 */
export const notices = pgTable(
	'notices',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		kind: text('kind').$type<NoticeKind>().notNull(),
		actId: uuid('act_id').notNull(),
		/** Who acted, and may take it back. */
		actorId: uuid('actor_id').references(() => users.id),
		subjectId: text('subject_id').notNull(),
		sentence: text('sentence').notNull(),
		/** Where on this server it waits. */
		path: text('path').notNull(),
		rod: jsonb('rod').$type<NoticeRod>(),
		createdAt: at('created_at').notNull(),
		leavesAt: at('leaves_at').notNull(),
		/** Mailed, taken back, or dropped as the person had left the site. */
		endedAt: at('ended_at'),
		end: noticeEndEnum('end'),
	},
	(t) => [
		index('notices_due').on(t.leavesAt).where(sql`ended_at is null`),
		unique('notices_once').on(t.userId, t.actId, t.subjectId),
		check('notices_path_ours', sql`${t.path} ~ '^/[a-z]'`),
		check('notices_ended', sql`(${t.endedAt} is null) = (${t.end} is null)`),
	],
);
