import { lockSite } from '../db/lock-site.ts';
import { checkOf, withdrawCheck } from '../features/check/publish-check.ts';
import { applyFlagChanges } from '../features/flag/apply-flag-changes.ts';
import { flagMomentOf } from '../features/flag/flag-moment.ts';
import { changesOfWithdrawing } from '../features/flag/plan-flag-changes.ts';
import { siteRoutes } from '../platform/guard.ts';
import { postNotices } from '../platform/notices.ts';
import { withdrawnSentence } from './check-sentences.ts';
import { peopleOfCompaniesOrRoles } from './people-concerned.ts';

/** Withdrawn with a reason: it counts no more, its flags lapse, and each person concerned is told once. */
export const withdrawCheckRoute = siteRoutes.check.withdraw.handler(async ({ input, context: { platform, member } }) => {
	const { siteId } = member;
	const { checkId, reason } = input;
	await checkOf(platform.db, siteId, checkId);
	return platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const now = platform.now();
		const changes = await changesOfWithdrawing(tx, siteId, checkId, reason, await flagMomentOf(tx, siteId, now));
		const check = await withdrawCheck(tx, member, checkId, reason, now);
		await applyFlagChanges(tx, platform, member, changes);
		const lapsed = changes.changed.filter(({ after }) => after.state === 'lapsed');
		const companyIds = lapsed.flatMap(({ row }) => row.companyId ?? []);
		const people = await peopleOfCompaniesOrRoles(tx, siteId, companyIds, ['project-engineer', 'owners-representative'], now);
		await postNotices(tx, { siteId, actId: platform.newId(), actorId: member.userId, now }, [
			{
				kind: 'check-withdrawn',
				userIds: people.map(({ userId }) => userId),
				subjectId: checkId,
				sentence: withdrawnSentence(check.number, reason, lapsed.length),
				path: `/sites/${siteId}/flags`,
			},
		]);
		return { lapsed: lapsed.length };
	});
});
