import { mayComment } from '#shared/flag/may-act.ts';
import { flagComments } from '../../db/schema/flag.ts';
import { audit } from '../../platform/audit.ts';
import { postNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Forbidden } from '../../platform/refuse.ts';
import { noticesOfComment } from './flag-notices.ts';
import type { FlagRow } from './flag-rows.ts';

/** Says something on a flag, for good. FORBIDDEN for who only looks on. */
export async function addComment(platform: Platform, member: Member, flag: FlagRow, text: string): Promise<Record<string, never>> {
	if (!mayComment(member, flag)) throw new Forbidden();
	await platform.transaction(async (tx) => {
		const comment = { id: platform.newId(), siteId: member.siteId, flagId: flag.id, text, saidBy: member.userId, saidAt: platform.now() };
		await tx.insert(flagComments).values(comment);
		await audit(tx, member, { kind: 'flag-commented', subjectId: flag.id, data: { number: flag.number, text } });
		await postNotices(
			tx,
			{ siteId: member.siteId, actId: comment.id, actorId: member.userId, now: comment.saidAt },
			await noticesOfComment(tx, member, flag, text, comment.saidAt),
		);
	});
	return {};
}
