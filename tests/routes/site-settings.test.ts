import { safe } from '@orpc/client';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { SiteSettings } from '#shared/site/site-settings.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let siteId: string;
let project: Awaited<ReturnType<TestServer['addMember']>>;
beforeAll(async () => {
	server = await openTestServer();
	siteId = await server.addSite();
	project = await server.addMember(siteId, ['project-engineer']);
});
afterAll(() => server.close());

const outcomeOf = async (call: Promise<unknown>) => {
	const { error } = await safe(call);
	const refused = error as { code?: string; data?: { code?: string } } | null;
	return refused === null ? 'done' : (refused.data?.code ?? refused.code);
};

describe('a site’s settings', () => {
	it('begin with the common ones, and are changed whole by the project engineer, on the record', async () => {
		const { settings, version } = await project.api.site.settings({ siteId });
		expect(settings).toMatchObject({ timeZone: 'Europe/Zurich', isFitCheckedBySecond: true, defaultDecision: 'guarded' });
		const calendar = { workingDays: [6, 1, 1], startsAt: '06:30', endsAt: '15:00', holidays: ['2026-12-25', '2026-01-01', '2026-12-25'] };
		const wanted: SiteSettings = { ...settings, calendar, needsSecondFactor: true };
		const saved = await project.api.site.saveSettings({ siteId, settings: wanted, version });
		expect(saved.settings.calendar).toEqual({ ...calendar, workingDays: [1, 6], holidays: ['2026-01-01', '2026-12-25'] });
		expect(await project.api.site.settings({ siteId })).toEqual(saved);
		const [entry] = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.kind, 'site-settings-changed'));
		expect(entry).toMatchObject({ siteId, userId: project.userId, data: { changed: ['calendar', 'needsSecondFactor'] } });
		expect(entry?.data).toMatchObject({ before: { needsSecondFactor: false }, after: { needsSecondFactor: true } });
	});

	it('refuse who read an older version: of three at once one is done', async () => {
		const { settings, version } = await project.api.site.settings({ siteId });
		const asked = [1, 2, 4].map((faceSpacingM) =>
			outcomeOf(
				project.api.site.saveSettings({
					siteId,
					version,
					settings: { ...settings, checkpoints: { ...settings.checkpoints, faceSpacingM } },
				}),
			),
		);
		expect((await Promise.all(asked)).sort()).toEqual(['CONFLICT', 'CONFLICT', 'done']);
	});

	it('refuse what is no calendar, no zone, no spacing, and what nobody asked for', async () => {
		const { settings, version } = await project.api.site.settings({ siteId });
		const save = (change: object) => outcomeOf(project.api.site.saveSettings({ siteId, version, settings: { ...settings, ...change } }));
		const calendar = (change: object) => save({ calendar: { ...settings.calendar, ...change } });
		expect(await save({ timeZone: 'Mars/Base' })).toBe('bad-time-zone');
		for (const wrong of [
			{ workingDays: [] },
			{ workingDays: [0] },
			{ startsAt: '7:00' },
			{ startsAt: '12:00', endsAt: '12:30' },
			{ holidays: ['2026-02-30'] },
			{ holidays: Array.from({ length: 401 }, () => '2026-12-25') },
			{ nightWork: true },
		])
			expect(await calendar(wrong), JSON.stringify(wrong)).toBe('BAD_REQUEST');
		const { checkpoints } = settings;
		for (const wrong of [
			{ checkpoints: { ...checkpoints, faceSpacingM: 0.01 } },
			{ checkpoints: { ...checkpoints, kinds: { plan: false, face: false, level: false } } },
			{ isInvented: true },
			{ defaultDecision: 'lenient' },
		])
			expect(await save(wrong), JSON.stringify(wrong)).toBe('BAD_REQUEST');
		expect((await project.api.site.settings({ siteId })).version).toBe(version);
	});
});
