import { eq } from 'drizzle-orm';
import { lockSite } from '../db/lock-site.ts';
import { sites } from '../db/schema/site.ts';
import { checkOf, withdrawCheck } from '../features/check/publish-check.ts';
import { applyFlagChanges } from '../features/flag/apply-flag-changes.ts';
import { flagMomentOf } from '../features/flag/flag-moment.ts';
import { changesOfWithdrawing } from '../features/flag/plan-flag-changes.ts';
import { siteRoutes } from '../platform/guard.ts';
import { postMail } from '../platform/post-mail.ts';
import { foundOne } from '../platform/refuse.ts';
import { withdrawnLetter } from './check-letters.ts';
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
		const site = foundOne(await tx.select().from(sites).where(eq(sites.id, siteId)));
		const companyIds = lapsed.flatMap(({ row }) => row.companyId ?? []);
		for (const { email } of await peopleOfCompaniesOrRoles(tx, siteId, companyIds, ['project-engineer', 'owners-representative'], now)) {
			const url = `${platform.publicUrl()}/sites/${siteId}/flags`;
			const letter = withdrawnLetter({ siteName: site.name, number: check.number, reason, lapsed: lapsed.length, url });
			await postMail(tx, { to: email, letter, now });
		}
		return { lapsed: lapsed.length };
	});
});
