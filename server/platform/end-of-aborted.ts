import type { Transaction } from '../db/database.ts';
import type { JobEnd, Platform } from './platform.ts';

/**
 * How an aborted run ends. Where a person cancelled it, `end` writes so on what the job was making; else (time limit, the server's
 * end) it throws: the queue decides, and nothing is called cancelled that nobody cancelled.
 */
export async function endOfAborted(
	platform: Pick<Platform, 'transaction'>,
	signal: AbortSignal,
	end: (tx: Transaction) => Promise<unknown>,
): Promise<JobEnd> {
	if (signal.reason !== 'cancelled') throw new Error(`The run was aborted: ${String(signal.reason)}.`);
	await platform.transaction(end);
	return { state: 'cancelled' };
}
