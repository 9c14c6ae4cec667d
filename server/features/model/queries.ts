import { and, asc, desc, eq, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { z } from 'zod';
import type { modelSummary, RevisionDetail, RevisionSummary, StoredElement, storedCheckpoint } from '#shared/model/contract.ts';
import type { Handle } from '../../db/database.ts';
import { checkpointOf, elementOf } from '../../db/model-rows.ts';
import { users } from '../../db/schema/account.ts';
import { addedCheckpoints, checkpointChoices, checkpoints, elements, models, revisions } from '../../db/schema/model.ts';
import { foundOne, NotFound, Refused } from '../../platform/refuse.ts';

const chooser = alias(users, 'chooser');
const adder = alias(users, 'adder');

const summaryColumns = {
	revisionId: revisions.id,
	modelId: revisions.modelId,
	number: revisions.number,
	fileName: revisions.fileName,
	fileSha256: revisions.fileSha256,
	fileBytes: revisions.fileBytes,
	state: revisions.state,
	reason: revisions.reason,
	jobId: revisions.jobId,
	uploadedBy: users.name,
	uploadedAt: revisions.uploadedAt,
	elementCount: sql<number>`(select count(*)::int from ${elements} where ${elements.revisionId} = ${revisions.id})`,
	checkpointCount: sql<number>`(select count(*)::int from ${checkpoints} where ${checkpoints.revisionId} = ${revisions.id})`,
};

/** The site's models by name, each with its revisions, newest first. */
export async function modelsOf(db: Handle, siteId: string): Promise<z.infer<typeof modelSummary>[]> {
	const named = await db
		.select({ modelId: models.id, name: models.name })
		.from(models)
		.where(eq(models.siteId, siteId))
		.orderBy(asc(models.name));
	const read: RevisionSummary[] = await db
		.select(summaryColumns)
		.from(revisions)
		.innerJoin(users, eq(users.id, revisions.uploadedBy))
		.where(eq(revisions.siteId, siteId))
		.orderBy(desc(revisions.number));
	return named.map((model) => ({ ...model, revisions: read.filter(({ modelId }) => modelId === model.modelId) }));
}

/** One revision of the site, read or not; NOT_FOUND for another site's. */
export async function revisionDetailOf(db: Handle, siteId: string, revisionId: string): Promise<RevisionDetail> {
	const rows = await db
		.select({ ...summaryColumns, modelName: models.name, reading: revisions.reading })
		.from(revisions)
		.innerJoin(users, eq(users.id, revisions.uploadedBy))
		.innerJoin(models, eq(models.id, revisions.modelId))
		.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId)));
	const { reading, ...summary } = foundOne(rows);
	if (reading === null) {
		throw new Refused('not-read', summary.reason ?? 'This revision is still being read. Follow its job, then look again.', 'revisionId');
	}
	return { ...summary, reading };
}

/** Throws NOT_FOUND unless the revision is the site's: what hangs on a revision is read after this. */
async function expectRevision(db: Handle, siteId: string, revisionId: string): Promise<void> {
	foundOne(
		await db
			.select({ id: revisions.id })
			.from(revisions)
			.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId))),
	);
}

/** A revision's elements in the order of the file. */
export async function elementsOf(db: Handle, siteId: string, revisionId: string): Promise<StoredElement[]> {
	await expectRevision(db, siteId, revisionId);
	const placed = db
		.select({ elementId: checkpoints.elementId, placed: sql<number>`count(*)::int`.as('placed') })
		.from(checkpoints)
		.where(eq(checkpoints.revisionId, revisionId))
		.groupBy(checkpoints.elementId)
		.as('placed_checkpoints');
	const rows = await db
		.select({ element: elements, placed: placed.placed })
		.from(elements)
		.leftJoin(placed, eq(placed.elementId, elements.id))
		.where(eq(elements.revisionId, revisionId))
		.orderBy(asc(elements.entityNumber));
	return rows.map(({ element, placed: checkpointCount }) => ({ ...elementOf(element), checkpointCount: checkpointCount ?? 0 }));
}

/** A revision's checkpoints in the order in which the reading placed them. */
export async function checkpointsOf(db: Handle, siteId: string, revisionId: string): Promise<z.infer<typeof storedCheckpoint>[]> {
	await expectRevision(db, siteId, revisionId);
	const rows = await db
		.select({
			checkpoint: checkpoints,
			element: { entityNumber: elements.entityNumber, globalId: elements.globalId },
			choice: checkpointChoices,
			chosenBy: chooser.name,
			added: { reason: addedCheckpoints.reason, at: addedCheckpoints.addedAt },
			addedBy: adder.name,
		})
		.from(checkpoints)
		.innerJoin(elements, eq(elements.id, checkpoints.elementId))
		.innerJoin(revisions, eq(revisions.id, checkpoints.revisionId))
		.leftJoin(checkpointChoices, and(eq(checkpointChoices.modelId, revisions.modelId), eq(checkpointChoices.checkpointId, checkpoints.id)))
		.leftJoin(chooser, eq(chooser.id, checkpointChoices.chosenBy))
		.leftJoin(addedCheckpoints, and(eq(addedCheckpoints.modelId, revisions.modelId), eq(addedCheckpoints.id, checkpoints.id)))
		.leftJoin(adder, eq(adder.id, addedCheckpoints.addedBy))
		.where(eq(checkpoints.revisionId, revisionId))
		.orderBy(asc(checkpoints.position));
	return rows.map(({ checkpoint, element, choice, chosenBy, added, addedBy }) => ({
		...checkpointOf(checkpoint, element),
		requirement: choice?.requirement ?? 'required',
		choice: choice === null ? null : { by: chosenBy ?? '', at: choice.chosenAt, reason: choice.reason },
		added: added === null ? null : { by: addedBy ?? '', at: added.at, reason: added.reason },
	}));
}

/** The hash under which a revision's picture is kept; NOT_FOUND where it has none. */
export async function pictureOf(db: Handle, siteId: string, revisionId: string): Promise<{ pictureSha256: string; name: string }> {
	const { pictureSha256, name, number } = foundOne(
		await db
			.select({ pictureSha256: revisions.pictureSha256, name: models.name, number: revisions.number })
			.from(revisions)
			.innerJoin(models, eq(models.id, revisions.modelId))
			.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId))),
	);
	if (pictureSha256 === null) throw new NotFound('This revision has no picture.');
	return { pictureSha256, name: `${name} rev ${number}.glb` };
}
