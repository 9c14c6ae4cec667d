import { sql } from 'drizzle-orm';
import { boolean, check, index, integer, pgEnum, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { users } from './account.ts';
import { at, id, siteId } from './columns.ts';
import { sites } from './site.ts';

export const jobStateEnum = pgEnum('job_state', ['waiting', 'running', 'done', 'failed', 'cancelled']);

/** Beside pg-boss's own row: what a person sees of long work, and the wish to cancel it. */
export const jobs = pgTable(
	'jobs',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		kind: text('kind').notNull(),
		state: jobStateEnum('state').notNull(),
		doing: text('doing').notNull(),
		done: integer('done').notNull(),
		of: integer('of').notNull(),
		reason: text('reason'),
		subjectId: uuid('subject_id'),
		isCancelWished: boolean('is_cancel_wished').notNull(),
		startedBy: uuid('started_by')
			.notNull()
			.references(() => users.id),
		createdAt: at('created_at').notNull(),
		endedAt: at('ended_at'),
	},
	(t) => [index('jobs_site').on(t.siteId), check('jobs_done_of', sql`${t.done} >= 0 and ${t.of} >= 0`)],
);
