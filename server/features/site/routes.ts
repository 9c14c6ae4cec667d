import { siteRoutes as ofSite, signedInRoutes } from '../../platform/guard.ts';
import { peopleRoutes } from './people-routes.ts';
import { siteDetailOf, sitesOf } from './queries.ts';

/** Founding a site also writes its first sheet: `server/workflows/found-site.ts`. */
export const siteRoutes = {
	list: signedInRoutes.site.list.handler(({ context: { platform, signedIn } }) => sitesOf(platform.db, signedIn, platform.now())),
	...peopleRoutes,
	get: ofSite.site.get.handler(({ context: { platform, member } }) => siteDetailOf(platform.db, member, platform.now())),
};
