import { modelJobs } from '#shared/model/jobs.ts';
import type { Transaction } from '../../db/database.ts';
import { revisions } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import { startJob } from '../../platform/job-row.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { NotFound, Refused } from '../../platform/refuse.ts';
import { lockModel } from './newest-revision.ts';
import { modelOf, newestOf } from './said-of-reading.ts';

type Begun = { revisionId: string; jobId: string };

/**
 * Reads the newest file of a model once more, as its next revision, by all that is said now: what was read before, and every check on it,
 * stays as it is. Refused while a revision is being read.
 */
export function readAgain(platform: Platform, member: Member, { modelId }: { modelId: string }): Promise<Begun> {
	return platform.transaction(async (tx) => {
		await modelOf(tx, member.siteId, modelId);
		await lockModel(tx, modelId);
		return beginAgain(platform, tx, member, modelId);
	});
}

/** Within a transaction that has locked the model. */
export async function beginAgain(platform: Platform, tx: Transaction, member: Member, modelId: string): Promise<Begun> {
	const { newest } = await newestOf(tx, modelId);
	if (newest === null) throw new NotFound('This model has no revision yet.');
	if (newest.state === 'reading')
		throw new Refused('being-read', `Revision ${newest.number} is still being read. Wait for it, then look again.`, 'modelId');
	const [revisionId, jobId, number] = [platform.newId(), platform.newId(), newest.number + 1];
	const { siteId, fileName, fileSha256, fileBytes } = newest;
	await startJob(platform, tx, member, modelJobs.readIfc, { jobId, siteId, revisionId }, { subjectId: revisionId });
	await tx.insert(revisions).values({
		id: revisionId,
		siteId,
		modelId,
		number,
		fileName,
		fileSha256,
		fileBytes,
		state: 'reading',
		jobId,
		uploadedBy: member.userId,
		uploadedAt: platform.now(),
	});
	const data = { modelId, number, of: newest.number, fileName, fileSha256 };
	await audit(tx, member, { kind: 'model-read-again', subjectId: revisionId, data });
	return { revisionId, jobId };
}
