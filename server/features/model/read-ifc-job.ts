import { mkdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { and, eq } from 'drizzle-orm';
import { modelJobs } from '#shared/model/jobs.ts';
import type { Transaction } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { revisions } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import { endOfAborted } from '../../platform/end-of-aborted.ts';
import { runnerOf } from '../../platform/job-runner.ts';
import type { JobContext, JobEnd, Platform } from '../../platform/platform.ts';
import { readIfcInChild } from './read-ifc-in-child.ts';
import { choicesFor } from './said-of-reading.ts';
import { storeReading } from './store-reading.ts';

/** What one file may cost; a file that asks for more is refused with that reason, and the server lives. */
export const readingLimits = { timeMs: 300_000, memoryMb: 1536 } as const;

const noElements = 'The file can be read, but holds no building elements. Export the model with its elements, then upload it again.';

interface RevisionInput {
	siteId: string;
	revisionId: string;
}

/** Reads an uploaded IFC file in a child process and stores what it found, whole or not at all. Run twice it is the same rows once. */
export const readIfcRunner = runnerOf(modelJobs.readIfc, readRevision, async (input, platform, reason) => {
	await fail(platform, input, reason);
});

async function readRevision(input: RevisionInput & { jobId: string }, { platform, report, signal }: JobContext): Promise<JobEnd> {
	const { siteId, revisionId } = input;
	const [revision] = await platform.db
		.select()
		.from(revisions)
		.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId)));
	if (revision?.state !== 'reading') return { state: 'done' };
	await mkdir(platform.uploadFolder, { recursive: true });
	const glbPath = join(platform.uploadFolder, `picture-${input.jobId}.glb`);
	try {
		const path = platform.files.pathOf(revision.fileSha256);
		const choices = await choicesFor(platform.db, siteId, revision.modelId);
		const outcome = await readIfcInChild({ path, glbPath, ...readingLimits, choices, signal, onProgress: report });
		if (signal.aborted) return await endOfAborted(platform, signal, (tx) => endReading(tx, input, 'cancelled', null));
		if (!outcome.ok) return await fail(platform, input, outcome.message);
		const { reading } = outcome;
		if (reading.elements.length === 0) return await fail(platform, input, noElements);
		report({ doing: 'Storing elements and checkpoints', done: reading.elements.length, of: reading.elements.length });
		const picture = outcome.hasPicture ? await platform.files.keepFrom(glbPath) : null;
		await platform.transaction(async (tx) => {
			if (!(await storeReading(tx, input, reading, picture, platform))) return;
			const data = { elements: reading.elements.length, checkpoints: reading.checkpoints.length, skipped: reading.skipped.length };
			await audit(tx, await uploaderOf(tx, revisionId), { kind: 'model-read', subjectId: revisionId, data }, siteId);
		});
		return { state: 'done' };
	} finally {
		await rm(glbPath, { force: true });
	}
}

/** The revision says why it could not be read; nothing else of the file is kept. */
async function fail(platform: Platform, input: RevisionInput, reason: string): Promise<JobEnd> {
	await platform.transaction(async (tx) => {
		if (!(await endReading(tx, input, 'failed', reason))) return;
		const entry = { kind: 'model-failed', subjectId: input.revisionId, data: { reason } } as const;
		await audit(tx, await uploaderOf(tx, input.revisionId), entry, input.siteId);
	});
	return { state: 'failed', reason };
}

async function endReading(
	tx: Transaction,
	{ siteId, revisionId }: RevisionInput,
	state: 'failed' | 'cancelled',
	reason: string | null,
): Promise<boolean> {
	const ended = await tx
		.update(revisions)
		.set({ state, reason })
		.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId), eq(revisions.state, 'reading')))
		.returning({ id: revisions.id });
	return ended.length > 0;
}

/** On whose wish the job runs. */
async function uploaderOf(tx: Transaction, revisionId: string): Promise<{ userId: string; name: string; email: string }> {
	const [uploader] = await tx
		.select({ userId: users.id, name: users.name, email: users.email })
		.from(revisions)
		.innerJoin(users, eq(users.id, revisions.uploadedBy))
		.where(eq(revisions.id, revisionId));
	if (uploader === undefined) throw new Error(`Nobody uploaded revision ${revisionId}.`);
	return uploader;
}
