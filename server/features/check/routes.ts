import { writeCheckCsv } from '#shared/check/write-check-csv.ts';
import { siteRoutes } from '../../platform/guard.ts';
import { checkDetailOf } from './check-detail.ts';
import { checksOf } from './queries.ts';
import { runCheck } from './run-check.ts';

export const checkRoutes = {
	list: siteRoutes.check.list.handler(({ context: { platform, member } }) => checksOf(platform.db, member)),
	get: siteRoutes.check.get.handler(({ input, context: { platform, member } }) => checkDetailOf(platform.db, member, input.checkId)),
	/** What the member sees of the check, as `get` gives it. */
	csv: siteRoutes.check.csv.handler(async ({ input, context: { platform, member } }) => {
		const check = await checkDetailOf(platform.db, member, input.checkId);
		const elementById = new Map(check.elements.map((element) => [element.elementId, element]));
		const setupNameById = new Map(check.fits.map(({ setupId, setupName }) => [setupId, setupName]));
		const text = writeCheckCsv(
			check.deviations,
			check.derived,
			(elementId) => elementById.get(elementId),
			(setupId) => setupNameById.get(setupId),
		);
		return new File([text], `check-${check.number}.csv`, { type: 'text/csv' });
	}),
	run: siteRoutes.check.run.handler(({ input: { revisionId, surveyId, sheetId }, context: { platform, member } }) =>
		runCheck(platform, member, { revisionId, surveyId, sheetId }),
	),
};
