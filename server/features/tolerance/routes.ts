import { siteRoutes } from '../../platform/guard.ts';
import { discardDraft, saveDraft } from './draft-sheet.ts';
import { sheetOf, sheetsOf } from './queries.ts';
import { sheetWeightOf } from './weigh.ts';

export const toleranceRoutes = {
	list: siteRoutes.tolerance.list.handler(({ context: { platform, member } }) => sheetsOf(platform.db, member.siteId)),
	get: siteRoutes.tolerance.get.handler(({ input, context: { platform, member } }) => sheetOf(platform.db, member.siteId, input.sheetId)),
	weigh: siteRoutes.tolerance.weigh.handler(({ input, context: { platform, member } }) => sheetWeightOf(platform.db, member, input.sheet)),
	saveDraft: siteRoutes.tolerance.saveDraft.handler(({ input, context: { platform, member } }) => saveDraft(platform, member, input)),
	discardDraft: siteRoutes.tolerance.discardDraft.handler(({ input, context: { platform, member } }) =>
		discardDraft(platform, member, input.sheetId),
	),
};
