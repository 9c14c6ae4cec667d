import { and, desc, eq, max } from 'drizzle-orm';
import type { z } from 'zod';
import type { modelContract } from '#shared/model/contract.ts';
import { modelJobs } from '#shared/model/jobs.ts';
import type { Transaction } from '../../db/database.ts';
import { models, revisions } from '../../db/schema/model.ts';
import { buildings } from '../../db/schema/site.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import { hashOf } from '../../platform/disk-files.ts';
import { startJob } from '../../platform/job-row.ts';
import { keepUpload } from '../../platform/keep-upload.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, foundOne, Refused } from '../../platform/refuse.ts';
import { takeUpload, useUpload } from '../../platform/uploads.ts';

type ReadModel = z.infer<(typeof modelContract)['read']['~orpc']['inputSchema'] & z.ZodType>;

/**
 * An uploaded file becomes the next revision of a model, or the first of a new one, and a job is begun that reads it.
 * Refused: the same bytes as the newest revision, a name that another model has. CONFLICT where two upload to one model at once.
 */
export async function readModel(
	platform: Platform,
	member: Member,
	{ uploadId, model }: Pick<ReadModel, 'uploadId' | 'model'>,
): Promise<{ revisionId: string; jobId: string }> {
	const upload = await takeUpload(platform, member, uploadId);
	if ('modelId' in model) await expectNews(platform, member, model.modelId, (await hashOf(upload.path)).sha256);
	else await expectNewName(platform, member, model.newName);
	const kept = await keepUpload(platform, upload);
	const [revisionId, jobId] = [platform.newId(), platform.newId()];
	const now = platform.now();
	try {
		await platform.transaction(async (tx) => {
			await useUpload(tx, uploadId, kept, now);
			const modelId = 'modelId' in model ? model.modelId : await addModel(tx, member.siteId, platform.newId(), model.newName);
			const number = await nextNumber(tx, modelId);
			await startJob(platform, tx, member, modelJobs.readIfc, { jobId, siteId: member.siteId, revisionId }, { subjectId: revisionId });
			await tx.insert(revisions).values({
				id: revisionId,
				siteId: member.siteId,
				modelId,
				number,
				fileName: upload.fileName,
				fileSha256: kept.sha256,
				fileBytes: kept.bytes,
				state: 'reading',
				jobId,
				uploadedBy: member.userId,
				uploadedAt: now,
			});
			const data = { modelId, number, fileName: upload.fileName, fileSha256: kept.sha256 };
			await audit(tx, member, { kind: 'model-uploaded', subjectId: revisionId, data });
		});
	} catch (error) {
		if (isUniqueViolation(error, 'revisions_number')) throw new Conflict('Someone uploaded to this model at the same moment. Look again.');
		if (isUniqueViolation(error, 'models_name')) throw nameTaken();
		throw error;
	}
	return { revisionId, jobId };
}

/** Refuses the bytes that the model's newest revision has, unless reading them was given up or failed. */
async function expectNews({ db }: Platform, member: Member, modelId: string, fileSha256: string): Promise<void> {
	foundOne(
		await db
			.select({ id: models.id })
			.from(models)
			.where(and(eq(models.siteId, member.siteId), eq(models.id, modelId))),
	);
	const [newest] = await db.select().from(revisions).where(eq(revisions.modelId, modelId)).orderBy(desc(revisions.number)).limit(1);
	if (newest?.fileSha256 !== fileSha256 || newest.state === 'failed' || newest.state === 'cancelled') return;
	throw new Refused(
		'same-file',
		`This is the same file as revision ${newest.number}, byte for byte. A new revision needs a file with a change in it.`,
		'uploadId',
	);
}

async function expectNewName({ db }: Platform, member: Member, name: string): Promise<void> {
	const taken = await db
		.select({ id: models.id })
		.from(models)
		.where(and(eq(models.siteId, member.siteId), eq(models.name, name)));
	if (taken.length > 0) throw nameTaken();
}

function nameTaken(): Refused {
	return new Refused('name-taken', 'A model of this name is there already. Choose it, or write another name.', 'model.newName');
}

/** Where a site has one building, its models are of that. */
async function addModel(tx: Transaction, siteId: string, modelId: string, name: string): Promise<string> {
	const [building, ...others] = await tx.select({ id: buildings.id }).from(buildings).where(eq(buildings.siteId, siteId));
	await tx.insert(models).values({ id: modelId, siteId, name, buildingId: others.length === 0 ? (building?.id ?? null) : null });
	return modelId;
}

async function nextNumber(tx: Transaction, modelId: string): Promise<number> {
	const [row] = await tx
		.select({ highest: max(revisions.number) })
		.from(revisions)
		.where(eq(revisions.modelId, modelId));
	return (row?.highest ?? 0) + 1;
}
