import { setTimeout } from 'node:timers/promises';
import type { JobProgress } from '#shared/job/contract.ts';
import type { Db } from '../../db/database.ts';
import { progressOf } from './queries.ts';

const pollMs = 200;
const ended: readonly JobProgress['state'][] = ['done', 'failed', 'cancelled'];

/** The job as it is, then each change, until it ends, nobody listens any more, or who listens may no longer see it. */
export async function* followJob(
	db: Db,
	siteId: string,
	jobId: string,
	signal: AbortSignal | undefined,
	maySee: () => Promise<boolean>,
): AsyncGenerator<JobProgress, void> {
	let last = '';
	while (!signal?.aborted) {
		if (!(await maySee())) return;
		const progress = await progressOf(db, siteId, jobId);
		const seen = JSON.stringify(progress);
		if (seen !== last) yield progress;
		last = seen;
		if (ended.includes(progress.state)) return;
		await setTimeout(pollMs);
	}
}
