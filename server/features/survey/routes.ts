import { siteRoutes } from '../../platform/guard.ts';
import { pointsOf, surveyOf, surveysOf } from './queries.ts';
import { unvoidPoints, voidPoints } from './void-points.ts';

/** Storing also remembers the order of columns on the site: that route is a workflow. */
export const surveyRoutes = {
	list: siteRoutes.survey.list.handler(({ context: { platform, member } }) => surveysOf(platform.db, member.siteId)),
	get: siteRoutes.survey.get.handler(({ input, context: { platform, member } }) => surveyOf(platform.db, member.siteId, input.surveyId)),
	voidPoints: siteRoutes.survey.voidPoints.handler(({ input, context: { platform, member } }) => voidPoints(platform, member, input)),
	unvoidPoints: siteRoutes.survey.unvoidPoints.handler(({ input, context: { platform, member } }) => unvoidPoints(platform, member, input)),
	points: siteRoutes.survey.points.handler(({ input, context: { platform, member } }) => pointsOf(platform.db, member.siteId, input)),
};
