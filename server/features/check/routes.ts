import { siteRoutes } from '../../platform/guard.ts';
import { checkDetailOf } from './check-detail.ts';
import { checksOf } from './queries.ts';
import { runCheck } from './run-check.ts';

export const checkRoutes = {
	list: siteRoutes.check.list.handler(({ context: { platform, member } }) => checksOf(platform.db, member)),
	get: siteRoutes.check.get.handler(({ input, context: { platform, member } }) => checkDetailOf(platform.db, member, input.checkId)),
	run: siteRoutes.check.run.handler(({ input: { revisionId, surveyId, sheetId }, context: { platform, member } }) =>
		runCheck(platform, member, { revisionId, surveyId, sheetId }),
	),
};
