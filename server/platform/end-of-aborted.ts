import { eq } from 'drizzle-orm';
import type { Transaction } from '../db/database.ts';
import { jobs } from '../db/schema/job.ts';
import type { JobEnd, Platform } from './platform.ts';

/**
 * How an aborted job ends. Where a person wished it, `end` writes so on what the job was making; else (time limit, the server's
 * end) the abort's reason is thrown on, so that the queue tries again and nothing is called cancelled that nobody cancelled.
 */
export async function endOfAborted(
	platform: Pick<Platform, 'db' | 'transaction'>,
	{ jobId, signal }: { jobId: string; signal: AbortSignal },
	end: (tx: Transaction) => Promise<unknown>,
): Promise<JobEnd> {
	const [row] = await platform.db.select({ isCancelWished: jobs.isCancelWished }).from(jobs).where(eq(jobs.id, jobId));
	if (row?.isCancelWished !== true) throw signal.reason;
	await platform.transaction(end);
	return { state: 'cancelled' };
}
