import { mkdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { and, asc, eq, notExists, sql } from 'drizzle-orm';
import type { PlacingPreview } from '#shared/model/choices-contract.ts';
import { modelJobs } from '#shared/model/jobs.ts';
import { addedCheckpoints, checkpoints, elements, models, placingPreviews } from '../../db/schema/model.ts';
import { endOfAborted } from '../../platform/end-of-aborted.ts';
import { runnerOf } from '../../platform/job-runner.ts';
import type { JobContext, JobEnd, Platform } from '../../platform/platform.ts';
import { readIfcInChild } from './read-ifc-in-child.ts';
import { readingLimits } from './read-ifc-job.ts';
import { choicesFor, newestOf } from './said-of-reading.ts';

type Counted = NonNullable<PlacingPreview['models']>;

/** Reads each model's newest file at the wanted density, keeps the counts and nothing else. */
export const previewPlacingRunner = runnerOf(modelJobs.previewPlacing, count);

async function count(
	{ siteId, previewId, jobId }: { siteId: string; previewId: string; jobId: string },
	{ platform, report, signal }: JobContext,
): Promise<JobEnd> {
	const { db } = platform;
	const [preview] = await db
		.select()
		.from(placingPreviews)
		.where(and(eq(placingPreviews.siteId, siteId), eq(placingPreviews.id, previewId)));
	if (preview === undefined) return { state: 'done' };
	await mkdir(platform.uploadFolder, { recursive: true });
	const glbPath = join(platform.uploadFolder, `preview-${jobId}.glb`);
	const counted: Counted = [];
	try {
		for (const { id: modelId, name } of await db.select().from(models).where(eq(models.siteId, siteId)).orderBy(asc(models.name))) {
			const { ready } = await newestOf(db, modelId);
			if (ready === null) continue;
			const choices = { ...(await choicesFor(db, siteId, modelId)), placing: preview.placing };
			const path = platform.files.pathOf(ready.fileSha256);
			const outcome = await readIfcInChild({ path, glbPath, ...readingLimits, choices, signal, onProgress: report });
			if (signal.aborted) return await endOfAborted(platform, signal, async () => {});
			if (!outcome.ok) return { state: 'failed', reason: `${name}: ${outcome.message}` };
			const after = new Map<string, number>();
			const classOf = new Map(outcome.reading.elements.map((element) => [element.entityNumber, element.class]));
			for (const { entityNumber } of outcome.reading.checkpoints) {
				const className = classOf.get(entityNumber) ?? '';
				after.set(className, (after.get(className) ?? 0) + 1);
			}
			const before = await placedByClass(platform, ready.id, modelId);
			const classes = [...new Set([...before.keys(), ...after.keys()])].sort();
			counted.push({
				modelId,
				name,
				revision: ready.number,
				classes: classes.map((each) => ({ class: each, before: before.get(each) ?? 0, after: after.get(each) ?? 0 })),
			});
		}
		await db.update(placingPreviews).set({ counted }).where(eq(placingPreviews.id, previewId));
		return { state: 'done' };
	} finally {
		await rm(glbPath, { force: true });
	}
}

/** What the revision has now, without what persons placed. */
async function placedByClass({ db }: Platform, revisionId: string, modelId: string): Promise<Map<string, number>> {
	const own = db
		.select({ id: addedCheckpoints.id })
		.from(addedCheckpoints)
		.where(and(eq(addedCheckpoints.modelId, modelId), eq(addedCheckpoints.id, checkpoints.id)));
	const rows = await db
		.select({ class: elements.class, placed: sql<number>`count(*)::int` })
		.from(checkpoints)
		.innerJoin(elements, eq(elements.id, checkpoints.elementId))
		.where(and(eq(checkpoints.revisionId, revisionId), notExists(own)))
		.groupBy(elements.class);
	return new Map(rows.map((row) => [row.class, row.placed]));
}
