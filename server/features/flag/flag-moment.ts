import type { FlagMoment } from '#shared/flag/flag-life.ts';
import { addWorkingDays } from '#shared/site/working-time.ts';
import type { Handle } from '../../db/database.ts';
import { siteSettingsOf } from '../../platform/site-settings.ts';

/** Working days that a contractor has to answer where nothing else is said (own). */
const answerDays = 2;

/** What a flag's life asks of its site at this moment: the clock, the deadline by the site's calendar, whether the owner consents. */
export async function flagMomentOf(db: Handle, siteId: string, now: Date): Promise<FlagMoment> {
	const { settings } = await siteSettingsOf(db, siteId);
	return {
		now: now.getTime(),
		answerBy: addWorkingDays(now, answerDays, settings.calendar, settings.timeZone).getTime(),
		isConsentAsked: settings.needsOwnersConsent,
	};
}
