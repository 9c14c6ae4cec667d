import type { Transaction } from '../db/database.ts';
import { jobs } from '../db/schema/job.ts';
import type { JobDefinition, Member, Platform } from './platform.ts';

/**
 * Begins long work inside the transaction that asks for it: our own row, which the person follows, and the job itself.
 * `subjectId` is what the job makes or fills. Throws where no runner is known for the definition.
 */
export async function startJob<Input extends { jobId: string; siteId: string }>(
	platform: Pick<Platform, 'jobs' | 'now'>,
	tx: Transaction,
	member: Pick<Member, 'userId'>,
	definition: JobDefinition<Input>,
	input: Input,
	{ subjectId, doing = 'Waiting for its turn' }: { subjectId: string; doing?: string },
): Promise<void> {
	await tx.insert(jobs).values({
		id: input.jobId,
		siteId: input.siteId,
		kind: definition.name,
		state: 'waiting',
		doing,
		done: 0,
		of: 0,
		reason: null,
		subjectId,
		isCancelWished: false,
		startedBy: member.userId,
		createdAt: platform.now(),
		endedAt: null,
	});
	await platform.jobs.enqueue(tx, definition, input);
}
