import { and, desc, eq } from 'drizzle-orm';
import type { Handle, Transaction } from '../../db/database.ts';
import { models, revisions } from '../../db/schema/model.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';

/** Until the transaction's end nobody else names, chooses, places or stores a reading on this model. */
export async function lockModel(tx: Transaction, modelId: string): Promise<void> {
	await tx.select({ id: models.id }).from(models).where(eq(models.id, modelId)).for('no key update');
}

/** A revision of the site that is read; NOT_FOUND for another site's, refused while it is being read or where it could not be. */
export async function readyRevision(db: Handle, siteId: string, revisionId: string): Promise<typeof revisions.$inferSelect> {
	const revision = foundOne(
		await db
			.select()
			.from(revisions)
			.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId))),
	);
	if (revision.state !== 'ready') throw new Refused('revision-not-ready', `Revision ${revision.number} is not read.`, 'revisionId');
	return revision;
}

/** Locks the revision's model, and refuses unless no newer revision of it is read: what is done to an older one would be lost with the next. */
export async function lockNewest(tx: Transaction, siteId: string, revisionId: string): Promise<typeof revisions.$inferSelect> {
	const revision = await readyRevision(tx, siteId, revisionId);
	await lockModel(tx, revision.modelId);
	const [newest] = await tx
		.select({ id: revisions.id, number: revisions.number })
		.from(revisions)
		.where(and(eq(revisions.modelId, revision.modelId), eq(revisions.state, 'ready')))
		.orderBy(desc(revisions.number))
		.limit(1);
	if (newest !== undefined && newest.id !== revisionId) {
		throw new Refused('not-newest', `Revision ${newest.number} is newer than revision ${revision.number}. Do it there.`, 'revisionId');
	}
	return revision;
}
