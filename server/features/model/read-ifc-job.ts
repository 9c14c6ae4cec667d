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
import type { JobEnd, Platform, SignedIn } from '../../platform/platform.ts';
import { readIfcInChild } from './read-ifc-in-child.ts';
import { storeReading } from './store-reading.ts';

/** What one file may cost; a file that asks for more is refused with that reason, and the server lives. */
const timeMs = 120_000;
const memoryMb = 1536;

/** Reads an uploaded IFC file in a child process and stores what it found, whole or not at all. Run twice it is the same rows once. */
export const readIfcRunner = runnerOf(modelJobs.readIfc, async ({ jobId, siteId, revisionId }, { platform, report, signal }) => {
	const [row] = await platform.db
		.select({ revision: revisions, reader: { userId: users.id, name: users.name, email: users.email } })
		.from(revisions)
		.innerJoin(users, eq(users.id, revisions.uploadedBy))
		.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId)));
	if (row === undefined || row.revision.state !== 'reading') return { state: 'done' };
	const { revision, reader } = row;
	await mkdir(platform.uploadFolder, { recursive: true });
	const glbPath = join(platform.uploadFolder, `picture-${jobId}.glb`);
	try {
		const path = platform.files.pathOf(revision.fileSha256);
		const outcome = await readIfcInChild({ path, glbPath, timeMs, memoryMb, signal, onProgress: report });
		if (signal.aborted) {
			return await endOfAborted(platform, { jobId, signal }, (tx) => endReading(tx, revisionId, 'cancelled', null));
		}
		if (!outcome.ok) return await fail(platform, reader, { siteId, revisionId }, outcome.message);
		const { reading } = outcome;
		if (reading.elements.length === 0) {
			const reason = 'The file can be read, but holds no building elements. Export the model with its elements, then upload it again.';
			return await fail(platform, reader, { siteId, revisionId }, reason);
		}
		report({ doing: 'Storing elements and checkpoints', done: reading.elements.length, of: reading.elements.length });
		const picture = outcome.hasPicture ? await platform.files.keepFrom(glbPath) : null;
		await platform.transaction(async (tx) => {
			if (!(await storeReading(tx, { siteId, revisionId }, reading, picture, platform))) return;
			const data = { elements: reading.elements.length, checkpoints: reading.checkpoints.length, skipped: reading.skipped.length };
			await audit(tx, reader, { kind: 'model-read', subjectId: revisionId, data }, siteId);
		});
		return { state: 'done' };
	} finally {
		await rm(glbPath, { force: true });
	}
});

/** The revision says why it could not be read; nothing else of the file is kept. */
async function fail(
	platform: Platform,
	reader: SignedIn,
	{ siteId, revisionId }: { siteId: string; revisionId: string },
	reason: string,
): Promise<JobEnd> {
	await platform.transaction(async (tx) => {
		if (!(await endReading(tx, revisionId, 'failed', reason))) return;
		await audit(tx, reader, { kind: 'model-failed', subjectId: revisionId, data: { reason } }, siteId);
	});
	return { state: 'failed', reason };
}

async function endReading(tx: Transaction, revisionId: string, state: 'failed' | 'cancelled', reason: string | null): Promise<boolean> {
	const ended = await tx
		.update(revisions)
		.set({ state, reason })
		.where(and(eq(revisions.id, revisionId), eq(revisions.state, 'reading')))
		.returning({ id: revisions.id });
	return ended.length > 0;
}
