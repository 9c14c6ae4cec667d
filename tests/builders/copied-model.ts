import { randomUUID } from 'node:crypto';
import { eq, inArray } from 'drizzle-orm';
import { checkpoints, elements, models, revisions } from '../../server/db/schema/model.ts';
import type { TestServer } from '../routes/harness.ts';

/**
 * The same model on another site, as rows: so that a file of tests reads its IFC once. Of each class named the first so many elements, with all
 * their checkpoints; ids of their own.
 */
export async function copyModel(
	{ platform: { db } }: TestServer,
	revisionId: string,
	toSiteId: string,
	perClass: Readonly<Record<string, number>>,
) {
	const [revision] = await db.select().from(revisions).where(eq(revisions.id, revisionId));
	if (revision === undefined) throw new Error('There is no such revision to copy.');
	const all = await db.select().from(elements).where(eq(elements.revisionId, revisionId)).orderBy(elements.entityNumber);
	const kept = Object.entries(perClass).flatMap(([wanted, count]) => all.filter((one) => one.class === wanted).slice(0, count));
	const idOf = new Map(kept.map(({ id }) => [id, randomUUID()]));
	const places = await db
		.select()
		.from(checkpoints)
		.where(inArray(checkpoints.elementId, [...idOf.keys()]))
		.orderBy(checkpoints.position);
	const copied = { modelId: randomUUID(), revisionId: randomUUID() };
	await db.insert(models).values({ id: copied.modelId, siteId: toSiteId, name: 'Frame' });
	await db.insert(revisions).values({ ...revision, id: copied.revisionId, modelId: copied.modelId, siteId: toSiteId, jobId: null });
	const rows = kept.map((one) => ({ ...one, id: idOf.get(one.id)!, siteId: toSiteId, revisionId: copied.revisionId }));
	await db.insert(elements).values(rows);
	await db
		.insert(checkpoints)
		.values(places.map((one) => ({ ...one, revisionId: copied.revisionId, elementId: idOf.get(one.elementId)! })));
	return copied;
}

/** The checkpoints of elements of this class. */
export function checkpointsOfClass<Point extends { elementId: string }>(
	points: readonly Point[],
	elementsOfModel: readonly { elementId: string; class: string }[],
	wanted: string,
): Point[] {
	const ids = new Set(elementsOfModel.filter((one) => one.class === wanted).map(({ elementId }) => elementId));
	return points.filter(({ elementId }) => ids.has(elementId));
}
