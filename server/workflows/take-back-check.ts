import { and, eq, gte, ne } from 'drizzle-orm';
import { takeBackMs } from '#shared/mail/notice.ts';
import type { Transaction } from '../db/database.ts';
import { lockSite } from '../db/lock-site.ts';
import { checks } from '../db/schema/check.ts';
import { notices } from '../db/schema/mail.ts';
import { sealedRecords } from '../db/schema/record.ts';
import { checkOf, unpublishCheck } from '../features/check/publish-check.ts';
import { takeBackFlags } from '../features/flag/take-back-flags.ts';
import { siteRoutes } from '../platform/guard.ts';
import { takeBackNotices } from '../platform/notices.ts';
import { Refused } from '../platform/refuse.ts';

/** A check that was published a moment ago is a trial again, as if it had not been: while nobody was told and nothing rests on it. */
export const takeBackCheckRoute = siteRoutes.check.takeBack.handler(async ({ input, context: { platform, member } }) => {
	const { siteId, userId } = member;
	await checkOf(platform.db, siteId, input.checkId);
	return platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const now = platform.now();
		const check = await checkOf(tx, siteId, input.checkId);
		const { publishedAct, publishedAt } = check;
		if (check.state !== 'published' || check.publishedBy !== userId || publishedAct === null || publishedAt === null)
			throw new Refused('not-yours-to-take-back', 'Only who published a check takes that back.', 'checkId');
		const isTold = await mayNotTakeBackNotices(tx, { siteId, actId: publishedAct.actId, actorId: userId, now });
		if (now.getTime() - publishedAt.getTime() >= takeBackMs || isTold)
			throw new Refused(
				'too-late',
				'It was published three minutes ago or more, or somebody was told. Withdraw it with a reason.',
				'checkId',
			);
		await expectNothingRestsOnIt(tx, siteId, input.checkId, publishedAt);
		await takeBackFlags(tx, member, publishedAct, now);
		await unpublishCheck(tx, member, check);
		return {};
	});
});

/** Takes back the notices; true where there are some and it is too late for them. An act of which nobody was to be told has none. */
async function mayNotTakeBackNotices(tx: Transaction, act: Parameters<typeof takeBackNotices>[1]): Promise<boolean> {
	const [any] = await tx
		.select({ id: notices.id })
		.from(notices)
		.where(and(eq(notices.siteId, act.siteId), eq(notices.actId, act.actId)))
		.limit(1);
	return any !== undefined && !(await takeBackNotices(tx, act));
}

async function expectNothingRestsOnIt(tx: Transaction, siteId: string, checkId: string, publishedAt: Date): Promise<void> {
	const [signed] = await tx
		.select({ id: sealedRecords.id })
		.from(sealedRecords)
		.where(and(eq(sealedRecords.siteId, siteId), gte(sealedRecords.signedAt, publishedAt)))
		.limit(1);
	const [later] = await tx
		.select({ number: checks.number })
		.from(checks)
		.where(and(eq(checks.siteId, siteId), eq(checks.state, 'published'), gte(checks.publishedAt, publishedAt), ne(checks.id, checkId)))
		.limit(1);
	if (signed === undefined && later === undefined) return;
	const what = later === undefined ? 'Something was signed on this site' : `Check ${later.number} was published`;
	throw new Refused('rested-on', `${what} since, so nothing was taken back. Withdraw the check with a reason.`, 'checkId');
}
