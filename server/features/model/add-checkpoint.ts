import { and, eq, max } from 'drizzle-orm';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { shortHash } from '#shared/model/checkpoint-id.ts';
import { longestMark, markEnd } from '#shared/model/mark-rules.ts';
import { type PickedFace, placePicked } from '#shared/model/place-picked.ts';
import { checkpointOf, elementOf } from '../../db/model-rows.ts';
import { addedCheckpoints, checkpoints, elements } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { lockNewest } from './newest-revision.ts';

interface Added {
	revisionId: string;
	elementId: string;
	place: Vector3;
	normal: Vector3;
	label: string;
	reason: string;
}

/**
 * A checkpoint of a person's own on an element of the newest revision: among its checkpoints from now on, and carried over into later
 * revisions that leave the element where it is. Refused: a place that is not on the element, an element without a GlobalId or a body.
 */
export async function addCheckpoint(
	platform: Platform,
	member: Member,
	{ revisionId, elementId, place, normal, label, reason }: Added,
): Promise<{ checkpointId: string; mark: string }> {
	const checkpointId = shortHash(`added|${platform.newId()}`);
	return platform.transaction(async (tx) => {
		const { modelId, siteId } = await lockNewest(tx, member.siteId, revisionId);
		const row = foundOne(
			await tx
				.select()
				.from(elements)
				.where(and(eq(elements.revisionId, revisionId), eq(elements.id, elementId))),
		);
		const element = elementOf(row);
		const same = await tx
			.select({ id: elements.id })
			.from(elements)
			.where(and(eq(elements.revisionId, revisionId), eq(elements.globalId, element.globalId)));
		if (element.globalId === '' || same.length > 1) {
			const why = element.globalId === '' ? 'has no GlobalId' : 'shares its GlobalId with another element';
			throw new Refused('no-stable-id', `${element.mark} ${why} in the file, so that no later revision would know it.`, 'elementId');
		}
		const own = await tx.select().from(checkpoints).where(eq(checkpoints.elementId, elementId));
		const ownCheckpoints = own.map((one) => checkpointOf(one, element));
		const placed = placePicked(element, ownCheckpoints, { place, normal } satisfies PickedFace);
		if ('why' in placed) throw new Refused(placed.code, placed.why, 'place');
		const ends = new Set(ownCheckpoints.map((one) => markEnd(element.mark, one.mark)));
		let number = 1;
		while (ends.has(`.X${number}`)) number++;
		const end = `X${number}`;
		const mark = `${element.mark}.${end}`;
		if (mark.length > longestMark)
			throw new Refused(
				'mark-not-possible',
				`"${mark}" has ${mark.length} characters; the field takes ${longestMark}. Give ${element.mark} a shorter name first.`,
				'elementId',
			);
		const [last] = await tx
			.select({ position: max(checkpoints.position) })
			.from(checkpoints)
			.where(eq(checkpoints.revisionId, revisionId));
		const body = {
			characteristic: placed.characteristic,
			label,
			xM: placed.place[0],
			yM: placed.place[1],
			zM: placed.place[2],
			normal: placed.direction === null ? null : [...placed.direction],
			surface: placed.surface === null ? null : [...placed.surface],
			isSoffit: placed.isSoffit,
		};
		await tx.insert(checkpoints).values({ ...body, revisionId, id: checkpointId, elementId, position: (last?.position ?? -1) + 1, mark });
		await tx.insert(addedCheckpoints).values({
			...body,
			siteId,
			modelId,
			id: checkpointId,
			globalId: element.globalId,
			markEnd: end,
			reason,
			boxM: row.boxM!,
			addedBy: member.userId,
			addedAt: platform.now(),
		});
		const data = { modelId, checkpointId, element: element.mark, mark, label, reason };
		await audit(tx, member, { kind: 'checkpoint-added', subjectId: revisionId, data });
		return { checkpointId, mark };
	});
}
