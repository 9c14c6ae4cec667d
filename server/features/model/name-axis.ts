import { and, eq } from 'drizzle-orm';
import { shortestAxisM } from '#shared/model/picked-axes.ts';
import type { PickedAxis } from '#shared/model/reading-choices.ts';
import { pickedAxes } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { NotFound, Refused } from '../../platform/refuse.ts';
import { lockModel } from './newest-revision.ts';
import { modelOf, newestOf, saidOfReadingOf } from './said-of-reading.ts';

/** As many as a building has; marks are made by going through them. */
const mostAxes = 200;

/**
 * Names an axis through two points for the model's building: later readings make marks of it. Refused: picks too near each other, a tag
 * that is taken, a model whose file brings a grid of its own.
 */
export async function nameAxis(
	platform: Platform,
	member: Member,
	{ modelId, tag, from, to }: { modelId: string } & PickedAxis,
): Promise<void> {
	const lengthM = Math.hypot(to[0] - from[0], to[1] - from[1]);
	if (lengthM < shortestAxisM)
		throw new Refused('too-near', `The two picks lie ${lengthM.toFixed(2)} m apart: an axis needs ${shortestAxisM} m.`, 'to');
	await platform.transaction(async (tx) => {
		const model = await modelOf(tx, member.siteId, modelId);
		await lockModel(tx, modelId);
		const { ready } = await newestOf(tx, modelId);
		const isGridOfFile = (ready?.reading?.grid.length ?? 0) > (ready?.reading?.choices?.axes.length ?? 0);
		if (isGridOfFile) throw new Refused('has-grid', 'The newest revision brings a grid of its own; marks are made of that.', 'tag');
		const { axes } = await saidOfReadingOf(tx, member.siteId, modelId);
		if (axes.some((axis) => axis.tag.toUpperCase() === tag.toUpperCase()))
			throw new Refused('tag-taken', `There is an axis ${tag} already. Take it away first, or write another name.`, 'tag');
		if (axes.length >= mostAxes) throw new Refused('too-many', `There are ${mostAxes} axes already.`, 'tag');
		const axisId = platform.newId();
		await tx.insert(pickedAxes).values({
			id: axisId,
			siteId: member.siteId,
			modelId,
			buildingId: model.buildingId,
			tag,
			fromXM: from[0],
			fromYM: from[1],
			toXM: to[0],
			toYM: to[1],
			pickedBy: member.userId,
			pickedAt: platform.now(),
		});
		const data = { axisId, buildingId: model.buildingId, tag, lengthM };
		await audit(tx, member, { kind: 'axis-named', subjectId: modelId, data });
	});
}

/** Takes an axis away; revisions that were read with it keep their marks. */
export async function removeAxis(
	platform: Platform,
	member: Member,
	{ modelId, axisId }: { modelId: string; axisId: string },
): Promise<void> {
	await platform.transaction(async (tx) => {
		await modelOf(tx, member.siteId, modelId);
		await lockModel(tx, modelId);
		const { axes } = await saidOfReadingOf(tx, member.siteId, modelId);
		const axis = axes.find((one) => one.axisId === axisId);
		const removed = await tx
			.delete(pickedAxes)
			.where(and(eq(pickedAxes.siteId, member.siteId), eq(pickedAxes.id, axisId)))
			.returning({ id: pickedAxes.id });
		if (axis === undefined || removed.length === 0) throw new NotFound('This axis is not there any more.');
		await audit(tx, member, { kind: 'axis-removed', subjectId: modelId, data: { axisId, tag: axis.tag } });
	});
}
