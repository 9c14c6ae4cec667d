import { starterSheet } from '#shared/tolerance/starter-sheet.ts';
import { addSite, expectTimeZone } from '../features/site/add-site.ts';
import { issueSheet, sheetToIssue } from '../features/tolerance/issue-sheet.ts';
import { signedInRoutes } from '../platform/guard.ts';

const issueReason = 'Starting points issued with the site. Check them against the contract documents before anything rests on them.';

/** A site and its starter sheet, issued: both or neither. */
export const foundSiteRoute = signedInRoutes.site.found.handler(async ({ input, context: { platform, signedIn } }) => {
	expectTimeZone(input.timeZone);
	const toIssue = await sheetToIssue(platform.newId(), starterSheet);
	const member = await platform.transaction(async (tx) => {
		const founder = await addSite(tx, platform, signedIn, input);
		await issueSheet(tx, founder, toIssue, issueReason, platform.now());
		return founder;
	});
	return { siteId: member.siteId, name: input.name, isInvented: false, roles: [...member.roles] };
});
