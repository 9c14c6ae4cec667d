import { and, desc, eq, inArray, lt } from 'drizzle-orm';
import type { SamePair } from '#shared/model/choices-contract.ts';
import { noChoices } from '#shared/model/reading-choices.ts';
import { type ComparedElement, sameElements } from '#shared/model/same-elements.ts';
import type { Handle } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { elementOf } from '../../db/model-rows.ts';
import { addedCheckpoints, checkpoints, elements, knownElements, revisions } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, foundOne } from '../../platform/refuse.ts';
import { lockNewest } from './newest-revision.ts';
import { beginAgain } from './read-again.ts';

type Revision = typeof revisions.$inferSelect;
type Compared = ComparedElement & { fileGlobalId: string; mark: string };

/** Elements whose GlobalIds a revision renewed against the one before, though shape and place are the same. */
export async function sameElementsOf(db: Handle, siteId: string, revisionId: string): Promise<SamePair[]> {
	const revision = foundOne(
		await db
			.select()
			.from(revisions)
			.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId))),
	);
	if (revision.state !== 'ready') return [];
	const [before] = await db
		.select()
		.from(revisions)
		.where(and(eq(revisions.modelId, revision.modelId), eq(revisions.state, 'ready'), lt(revisions.number, revision.number)))
		.orderBy(desc(revisions.number))
		.limit(1);
	if (before === undefined) return [];
	const newer = await comparedOf(db, revision);
	const older = await comparedOf(db, before);
	const placing = ({ reading }: Revision): string => {
		const { faceSpacingM, levelSpacingM, kinds } = (reading?.choices ?? noChoices).placing;
		return [faceSpacingM, levelSpacingM, kinds.plan, kinds.face, kinds.level].join();
	};
	const [newByOwn, oldByOwn] = [newer, older].map((list) => new Map(list.map((one) => [one.globalId, one])));
	return sameElements(newer, older, placing(revision) === placing(before)).map(([globalId, knownAs]) => {
		const [one, other] = [newByOwn!.get(globalId)!, oldByOwn!.get(knownAs)!];
		return { globalId, knownAs, mark: one.mark, markBefore: other.mark, class: one.class };
	});
}

async function comparedOf(db: Handle, { id, modelId }: Revision): Promise<Compared[]> {
	const rows = await db.select().from(elements).where(eq(elements.revisionId, id));
	const added = await db.select({ id: addedCheckpoints.id }).from(addedCheckpoints).where(eq(addedCheckpoints.modelId, modelId));
	const ofPersons = new Set(added.map((one) => one.id));
	const placed = await db
		.select({
			id: checkpoints.id,
			elementId: checkpoints.elementId,
			characteristic: checkpoints.characteristic,
			x: checkpoints.xM,
			y: checkpoints.yM,
			z: checkpoints.zM,
		})
		.from(checkpoints)
		.where(eq(checkpoints.revisionId, id));
	const byElement = new Map<string, ComparedElement['checkpoints'][number][]>();
	for (const { id: checkpointId, elementId, characteristic, x, y, z } of placed) {
		if (ofPersons.has(checkpointId)) continue;
		const own = byElement.get(elementId);
		if (own) own.push({ characteristic, place: [x, y, z] });
		else byElement.set(elementId, [{ characteristic, place: [x, y, z] }]);
	}
	return rows.map((row) => {
		const { elementId, globalId, fileGlobalId, class: className, mark, boxM } = elementOf(row);
		return { globalId, fileGlobalId: fileGlobalId ?? globalId, class: className, mark, boxM, checkpoints: byElement.get(elementId) ?? [] };
	});
}

/**
 * Accepts, once, that all proposed elements of the newest revision are those of before, and reads its file again: from then on they are
 * known as before, with their names, choices, own checkpoints and pours. CONFLICT where another number is proposed than was seen.
 */
export function acceptSame(
	platform: Platform,
	member: Member,
	{ revisionId, count }: { revisionId: string; count: number },
): Promise<{ revisionId: string; jobId: string }> {
	return platform.transaction(async (tx) => {
		const { modelId, siteId } = await lockNewest(tx, member.siteId, revisionId);
		const pairs = await sameElementsOf(tx, siteId, revisionId);
		if (pairs.length !== count) throw new Conflict(`${pairs.length} elements are proposed now, not ${count}. Look at them, then accept.`);
		const said = { siteId, modelId, acceptedBy: member.userId, acceptedAt: platform.now() };
		// An element that is known again under its first GlobalId needs no saying twice.
		await tx.delete(knownElements).where(
			and(
				eq(knownElements.modelId, modelId),
				inArray(
					knownElements.globalId,
					pairs.map(({ globalId }) => globalId),
				),
			),
		);
		await insertRows(
			tx,
			knownElements,
			pairs.map(({ globalId, knownAs }) => ({ ...said, globalId, knownAs })),
		);
		const data = { modelId, count: pairs.length, elements: pairs.slice(0, 200).map(({ globalId, knownAs }) => [globalId, knownAs]) };
		await audit(tx, member, { kind: 'elements-known-as', subjectId: revisionId, data });
		return beginAgain(platform, tx, member, modelId);
	});
}
