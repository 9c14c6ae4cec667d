import { eq } from 'drizzle-orm';
import { type SiteSettings, siteSettings } from '#shared/site/site-settings.ts';
import type { Handle } from '../db/database.ts';
import { sites } from '../db/schema/site.ts';
import { foundOne } from './refuse.ts';

/** What the site has agreed for itself, with its version; NOT_FOUND where there is no such site. */
export async function siteSettingsOf(db: Handle, siteId: string): Promise<{ settings: SiteSettings; version: number }> {
	const row = foundOne(await db.select().from(sites).where(eq(sites.id, siteId)));
	const { timeZone, calendar, isFitCheckedBySecond, defaultDecision, checkpointDensity, needsOwnersConsent, needsSecondFactor } = row;
	// Parsed: jsonb gives keys back in an order of its own.
	const settings = siteSettings.parse({
		timeZone,
		calendar,
		isFitCheckedBySecond,
		defaultDecision,
		checkpoints: checkpointDensity,
		needsOwnersConsent,
		needsSecondFactor,
	});
	return { settings, version: row.settingsVersion };
}
