import type { JobProgress } from '#shared/job/contract.ts';
import type { Api } from '../routes/harness.ts';

/** Follows a job to its end, as a page does. */
export async function followJob(api: Api, siteId: string, jobId: string): Promise<JobProgress> {
	let last: JobProgress | null = null;
	for await (const progress of await api.job.follow({ siteId, jobId })) last = progress;
	if (last === null) throw new Error('The job told nothing.');
	return last;
}
