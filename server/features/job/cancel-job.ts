import { and, eq, inArray } from 'drizzle-orm';
import type { JobProgress } from '#shared/job/contract.ts';
import { jobs } from '../../db/schema/job.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { progressOf } from './queries.ts';

/** Notes the wish; the run heeds it between its steps. Wished again, or too late, it changes nothing. */
export async function cancelJob(platform: Platform, member: Member, jobId: string): Promise<JobProgress> {
	return platform.transaction(async (tx) => {
		const wished = await tx
			.update(jobs)
			.set({ isCancelWished: true })
			.where(
				and(
					eq(jobs.siteId, member.siteId),
					eq(jobs.id, jobId),
					eq(jobs.isCancelWished, false),
					inArray(jobs.state, ['waiting', 'running']),
				),
			)
			.returning({ kind: jobs.kind });
		const [job] = wished;
		if (job !== undefined) await audit(tx, member, { kind: 'job-cancel-wished', subjectId: jobId, data: { kind: job.kind } });
		return progressOf(tx, member.siteId, jobId);
	});
}
