import { and, eq, inArray } from 'drizzle-orm';
import type { z } from 'zod';
import type { modelContract } from '#shared/model/contract.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { checkpointChoices, checkpoints } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { NotFound, Refused } from '../../platform/refuse.ts';
import { lockModel, readyRevision } from './newest-revision.ts';

type Chosen = Omit<z.infer<(typeof modelContract)['chooseCheckpoints']['~orpc']['inputSchema'] & z.ZodType>, 'siteId'>;

/**
 * Says of checkpoints of a revision whether they are required, by sample or left out: for later checks, and in later revisions too.
 * Refused: leaving out without a reason. NOT_FOUND where one of them is not the revision's; then none is changed.
 */
export async function chooseCheckpoints(
	platform: Platform,
	member: Member,
	{ revisionId, checkpointIds, requirement, reason }: Chosen,
): Promise<{ changed: number }> {
	if (requirement === 'left-out' && reason === null)
		throw new Refused('reason-missing', 'Say why these are left out: the reason stands on the check and on the pour’s record.', 'reason');
	const ids = [...new Set(checkpointIds)];
	return platform.transaction(async (tx) => {
		const { modelId, siteId } = await readyRevision(tx, member.siteId, revisionId);
		await lockModel(tx, modelId);
		const here = await tx
			.select({ id: checkpoints.id })
			.from(checkpoints)
			.where(and(eq(checkpoints.revisionId, revisionId), inArray(checkpoints.id, ids)));
		if (here.length < ids.length) throw new NotFound('One of these checkpoints is not in this revision. Look again, then choose.');
		await tx.delete(checkpointChoices).where(and(eq(checkpointChoices.modelId, modelId), inArray(checkpointChoices.checkpointId, ids)));
		const said = { siteId, modelId, requirement, reason, chosenBy: member.userId, chosenAt: platform.now() };
		await insertRows(
			tx,
			checkpointChoices,
			ids.map((checkpointId) => ({ ...said, checkpointId })),
		);
		const data = { modelId, requirement, reason, count: ids.length, checkpointIds: ids.slice(0, 200) };
		await audit(tx, member, { kind: 'checkpoints-chosen', subjectId: revisionId, data });
		return { changed: ids.length };
	});
}
