import { siteRoutes } from '../../platform/guard.ts';
import { sheetOf, sheetsOf } from './queries.ts';

export const toleranceRoutes = {
	list: siteRoutes.tolerance.list.handler(({ context: { platform, member } }) => sheetsOf(platform.db, member.siteId)),
	get: siteRoutes.tolerance.get.handler(({ input, context: { platform, member } }) => sheetOf(platform.db, member.siteId, input.sheetId)),
};
