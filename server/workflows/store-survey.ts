import { storeSurvey } from '../features/survey/store-survey.ts';
import { siteRoutes } from '../platform/guard.ts';
import { faultsOf } from './faults-of.ts';
import { rememberColumnOrder } from './remember-column-order.ts';

/** A point file becomes a survey, and the order of its columns is remembered on the site: both or neither. */
export const storeSurveyRoute = siteRoutes.survey.store.handler(async ({ input, context: { platform, member }, errors }) => {
	const stored = await storeSurvey(platform, member, input, (tx) => rememberColumnOrder(tx, member.siteId, input.reading));
	if (!stored.ok) throw errors.FAULTS(faultsOf(stored));
	return { surveyId: stored.surveyId, jobId: stored.jobId };
});
