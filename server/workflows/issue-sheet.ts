import type { ChangedVerdict } from '#shared/check/weigh-sheet.ts';
import { signedLimitText } from '#shared/tolerance/millimetre-text.ts';
import { lockSite } from '../db/lock-site.ts';
import { applyFlagChanges } from '../features/flag/apply-flag-changes.ts';
import { flagMomentOf } from '../features/flag/flag-moment.ts';
import { changesOfIssuing } from '../features/flag/plan-flag-changes.ts';
import { holdTouched } from '../features/pour/hold-touched.ts';
import { issueDraft } from '../features/tolerance/draft-sheet.ts';
import { sheetOf } from '../features/tolerance/queries.ts';
import { verdictsChangedBy } from '../features/tolerance/weigh.ts';
import { siteRoutes } from '../platform/guard.ts';

/** Issued: flags that its limits leave nothing of lapse, and released pours whose limits it changes are held at once. */
export const issueSheetRoute = siteRoutes.tolerance.issue.handler(async ({ input, context: { platform, member } }) => {
	const { siteId } = member;
	const { sheet, name } = await sheetOf(platform.db, siteId, input.sheetId);
	// Weighed before the transaction; inside, the draft is issued only if it is still the one that was read.
	const changed = await verdictsChangedBy(platform.db, siteId, sheet);
	const issued = await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const now = platform.now();
		const { revision } = await issueDraft(tx, member, input, now);
		const newVerdictOf = (modelId: string, checkpointId: string) => {
			const change = changed.get(`${modelId} ${checkpointId}`);
			return change === undefined ? null : { is: change.is, words: changedWords(change, `revision ${revision} of ${name}`) };
		};
		await applyFlagChanges(tx, platform, member, await changesOfIssuing(tx, siteId, newVerdictOf, await flagMomentOf(tx, siteId, now)));
		return { revision };
	});
	await holdTouched(platform, siteId);
	return issued;
});

/** "Limits changed: −10 to +10 mm before, −20 to +20 mm by revision 3 of Sheet C2." */
function changedWords({ wasMm, isMm }: ChangedVerdict, sheet: string): string {
	return `Limits changed: ${limitsWords(wasMm)} before, ${limitsWords(isMm)} by ${sheet}.`;
}

function limitsWords(limitsMm: ChangedVerdict['wasMm']): string {
	if (limitsMm === null) return 'no limits';
	const [lower, upper] = limitsMm;
	if (lower === null) return upper === null ? 'no limits' : `at most ${signedLimitText(upper)} mm`;
	return upper === null ? `at least ${signedLimitText(lower)} mm` : `${signedLimitText(lower)} to ${signedLimitText(upper)} mm`;
}
