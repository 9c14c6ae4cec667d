import { and, eq } from 'drizzle-orm';
import type { JobProgress } from '#shared/job/contract.ts';
import type { Handle } from '../../db/database.ts';
import { jobs } from '../../db/schema/job.ts';
import { foundOne } from '../../platform/refuse.ts';

/** A job of the site as the person sees it; NOT_FOUND for one of another site. */
export async function progressOf(db: Handle, siteId: string, jobId: string): Promise<JobProgress> {
	return foundOne(
		await db
			.select({
				jobId: jobs.id,
				kind: jobs.kind,
				state: jobs.state,
				doing: jobs.doing,
				done: jobs.done,
				of: jobs.of,
				reason: jobs.reason,
				subjectId: jobs.subjectId,
			})
			.from(jobs)
			.where(and(eq(jobs.siteId, siteId), eq(jobs.id, jobId))),
	);
}
