import { and, eq, inArray, notExists, sql } from 'drizzle-orm';
import type PgBoss from 'pg-boss';
import type { ExecuteSql } from '../db/connection.ts';
import { jobs } from '../db/schema/job.ts';
import type { JobRunner, Platform } from './platform.ts';
import { giveUp } from './run-job.ts';

const interruptedReason = 'The server ended in the middle of this, three times over. Nothing of it was kept. Start it again.';

/**
 * After a start: what was active belonged to a process that is no more. Each goes back into the queue while it has tries left; the others
 * are marked as failed, as is a row of ours whose job the queue no longer has. Call before any worker fetches.
 */
export async function settleLeftOverJobs(
	platform: Platform,
	boss: PgBoss,
	executeSql: ExecuteSql,
	runners: ReadonlyMap<string, JobRunner>,
): Promise<void> {
	const active = await queued(executeSql, "state = 'active'");
	for (const { id, name } of active) await boss.fail(name, id, { message: 'The server ended in the middle of it.' });
	const lost = await platform.db
		.select({ id: jobs.id, kind: jobs.kind })
		.from(jobs)
		.where(
			and(
				inArray(jobs.state, ['waiting', 'running']),
				notExists(
					sql`(select 1 from pgboss.job as queued where queued.id = ${jobs.id} and queued.state in ('created', 'retry', 'active'))`,
				),
			),
		);
	if (lost.length === 0) return;
	// A server that was stopped cleanly has failed its jobs itself.
	const failed = await queued(executeSql, "state = 'failed'");
	for (const { id, kind } of lost) {
		const runner = runners.get(kind);
		const job = failed.find((candidate) => candidate.id === id);
		if (runner !== undefined && job !== undefined) await giveUp(platform, runner, id, job.data, interruptedReason);
		else await failRow(platform, id);
	}
}

async function queued(executeSql: ExecuteSql, where: string): Promise<{ id: string; name: string; data: unknown }[]> {
	const { rows } = await executeSql(`select id, name, data from pgboss.job where ${where}`);
	return rows.map(({ id, name, data }) => ({ id: String(id), name: String(name), data }));
}

async function failRow(platform: Platform, jobId: string): Promise<void> {
	await platform.db
		.update(jobs)
		.set({ state: 'failed', reason: interruptedReason, endedAt: platform.now() })
		.where(and(eq(jobs.id, jobId), inArray(jobs.state, ['waiting', 'running'])));
}
