import { starterSheet } from '#shared/tolerance/starter-sheet.ts';
import { addSite } from '../features/site/add-site.ts';
import { invite } from '../features/site/invite.ts';
import { expectTimeZone } from '../features/site/settings.ts';
import { issueSheet, sheetToIssue } from '../features/tolerance/issue-sheet.ts';
import { signedInRoutes } from '../platform/guard.ts';

const issueReason = 'Starting points issued with the site. Check them against the contract documents before anything rests on them.';

/** A site, its starter sheet, issued, and the invitation of the owner's contact: all or nothing. */
export const foundSiteRoute = signedInRoutes.site.found.handler(async ({ input, context: { platform, signedIn } }) => {
	expectTimeZone(input.timeZone);
	const toIssue = await sheetToIssue(platform.newId(), starterSheet);
	const member = await platform.transaction(async (tx) => {
		const founder = await addSite(tx, platform, signedIn, input);
		await issueSheet(tx, founder, toIssue, issueReason, platform.now());
		if (input.ownersContact) {
			const invited = {
				email: input.ownersContact,
				roles: ['owners-representative' as const],
				companyId: null,
				isLead: false,
				deputy: null,
			};
			await invite(tx, platform, founder, invited);
		}
		return founder;
	});
	return { siteId: member.siteId, name: input.name, isInvented: false, roles: [...member.roles] };
});
