import { siteRoutes } from '../../platform/guard.ts';
import { controlSetsOf, controlSetWithPoints } from './queries.ts';

/** Storing also remembers the order of columns on the site: that route is a workflow. */
export const controlRoutes = {
	list: siteRoutes.control.list.handler(({ context: { platform, member } }) => controlSetsOf(platform.db, member.siteId)),
	get: siteRoutes.control.get.handler(({ input, context: { platform, member } }) =>
		controlSetWithPoints(platform.db, member.siteId, input.controlSetId),
	),
};
