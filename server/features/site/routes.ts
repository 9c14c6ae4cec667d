import { siteRoutes as ofSite, signedInRoutes } from '../../platform/guard.ts';
import { siteSettingsOf } from '../../platform/site-settings.ts';
import { peopleRoutes } from './people-routes.ts';
import { siteDetailOf, sitesOf } from './queries.ts';
import { saveSettings } from './settings.ts';

/** Founding a site also writes its first sheet: `server/workflows/found-site.ts`. */
export const siteRoutes = {
	list: signedInRoutes.site.list.handler(({ context: { platform, signedIn } }) => sitesOf(platform.db, signedIn, platform.now())),
	...peopleRoutes,
	settings: ofSite.site.settings.handler(({ context: { platform, member } }) => siteSettingsOf(platform.db, member.siteId)),
	saveSettings: ofSite.site.saveSettings.handler(({ input: { settings, version }, context: { platform, member } }) =>
		platform.transaction((tx) => saveSettings(tx, member, { settings, version })),
	),
	get: ofSite.site.get.handler(({ context: { platform, member } }) => siteDetailOf(platform.db, member, platform.now())),
};
