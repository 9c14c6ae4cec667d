import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { keptSettings, SiteSettings } from '#shared/site/site-settings.ts';
import type { Transaction } from '../../db/database.ts';
import { sites } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import type { Member } from '../../platform/platform.ts';
import { Conflict, Refused } from '../../platform/refuse.ts';
import { siteSettingsOf } from '../../platform/site-settings.ts';

/** Refuses a time zone that this server's calendar does not know. */
export function expectTimeZone(timeZone: string): void {
	try {
		new Intl.DateTimeFormat('en-GB', { timeZone });
	} catch {
		throw new Refused('bad-time-zone', 'Choose a time zone by region and city, like Europe/Zurich.', 'timeZone');
	}
}

/**
 * The site's settings as a whole, over the version that was read; CONFLICT over any other. The record keeps what was changed, before and
 * after. Deadlines that were set already stay as they were set.
 */
export async function saveSettings(
	tx: Transaction,
	member: Member,
	{ settings, version }: { settings: SiteSettings; version: number },
): Promise<z.infer<typeof keptSettings>> {
	expectTimeZone(settings.timeZone);
	const { settings: before } = await siteSettingsOf(tx, member.siteId);
	const wanted = inOrder(settings);
	const { timeZone, calendar, isFitCheckedBySecond, defaultDecision, checkpoints, needsOwnersConsent, needsSecondFactor } = wanted;
	const saved = await tx
		.update(sites)
		.set({
			timeZone,
			calendar,
			isFitCheckedBySecond,
			defaultDecision,
			checkpointDensity: checkpoints,
			needsOwnersConsent,
			needsSecondFactor,
			settingsVersion: version + 1,
		})
		.where(and(eq(sites.id, member.siteId), eq(sites.settingsVersion, version)))
		.returning({ id: sites.id });
	if (saved.length === 0) throw new Conflict('The settings were changed by somebody else meanwhile. Look at theirs, then change yours.');
	const data = changesOf(before, wanted);
	await audit(tx, member, { kind: 'site-settings-changed', subjectId: member.siteId, data });
	return { settings: wanted, version: version + 1 };
}

/** Days and dates once each, in their order, so that equal settings are equal texts. */
function inOrder(settings: SiteSettings): SiteSettings {
	const { workingDays, holidays } = settings.calendar;
	const calendar = { ...settings.calendar, workingDays: [...new Set(workingDays)].sort(), holidays: [...new Set(holidays)].sort() };
	return { ...settings, calendar };
}

type Changes = {
	changed: string[];
	before: Partial<SiteSettings>;
	after: Partial<SiteSettings>;
};

function changesOf(before: SiteSettings, after: SiteSettings): Changes {
	const changed = (Object.keys(after) as (keyof SiteSettings)[]).filter(
		(key) => JSON.stringify(before[key]) !== JSON.stringify(after[key]),
	);
	const only = (settings: SiteSettings): Partial<SiteSettings> => Object.fromEntries(changed.map((key) => [key, settings[key]]));
	return { changed, before: only(before), after: only(after) };
}
