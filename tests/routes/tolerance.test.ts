import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite } from '../builders/a-site.ts';
import { issuedSheet, plainSheet } from '../builders/as-built.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

describe('a tolerance sheet', () => {
	it('is drafted, changed, issued with a reason, and supersedes; what was issued is never edited', async () => {
		const { siteId, engineer, surveyor, owner } = await aSite(server);
		const first = await issuedSheet(server, engineer);
		const { api } = engineer;
		await expect(surveyor.api.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet: plainSheet })).rejects.toMatchObject({
			code: 'FORBIDDEN',
		});
		const draft = await api.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet: plainSheet });
		const wider = { ...plainSheet, name: 'Wider', rules: [{ id: 'all', match: {}, lowerMm: -30, upperMm: 30 }] };
		const both = await Promise.allSettled(
			[wider, plainSheet].map((sheet) =>
				api.tolerance.saveDraft({
					siteId,
					sheetId: draft.sheetId,
					seenSha256: draft.contentSha256,
					sheet: { ...sheet, decision: 'simple' },
				}),
			),
		);
		expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		const kept = await owner.api.tolerance.get({ siteId, sheetId: draft.sheetId });
		expect(kept).toMatchObject({ state: 'draft', revision: 2, decision: 'simple' });
		const issue = { siteId, sheetId: draft.sheetId, seenSha256: draft.contentSha256, reason: 'Agreed on 3 Dec.' };
		await expect(api.tolerance.issue(issue)).rejects.toMatchObject({ code: 'CONFLICT' });
		const issued = await Promise.allSettled([1, 2].map(() => api.tolerance.issue({ ...issue, seenSha256: kept.contentSha256 })));
		expect(issued.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		expect((await api.tolerance.list({ siteId })).map(({ revision, state }) => [revision, state])).toEqual([
			[2, 'issued'],
			[1, 'superseded'],
		]);
		expect(await api.tolerance.get({ siteId, sheetId: draft.sheetId })).toMatchObject({ issueReason: 'Agreed on 3 Dec.' });
		for (const sheetId of [first, draft.sheetId]) {
			const { contentSha256 } = await api.tolerance.get({ siteId, sheetId });
			await expect(api.tolerance.saveDraft({ siteId, sheetId, seenSha256: contentSha256, sheet: wider })).rejects.toMatchObject({
				data: { code: 'not-a-draft' },
			});
			await expect(api.tolerance.discardDraft({ siteId, sheetId })).rejects.toMatchObject({ data: { code: 'not-a-draft' } });
		}
		const kinds = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.subjectId, draft.sheetId));
		expect(kinds.map(({ kind }) => kind).sort()).toEqual(['sheet-draft-changed', 'sheet-drafted', 'sheet-issued']);
	});

	it('with a lower limit above its upper one is refused with its place, as is a name twice; nothing is stored', async () => {
		const { siteId, engineer } = await aSite(server);
		const save = (rules: typeof plainSheet.rules) =>
			engineer.api.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet: { ...plainSheet, rules } });
		await expect(save([plainSheet.rules[0]!, { id: 'x', match: {}, lowerMm: 5, upperMm: -5 }])).rejects.toMatchObject({
			message: expect.stringMatching(/^Rule 2: its lower limit \(5 mm\) is above its upper one \(-5 mm\)/),
			data: { code: 'limits-crossed', where: 'rules.1.lower.first.value' },
		});
		await expect(save([plainSheet.rules[0]!, plainSheet.rules[0]!])).rejects.toMatchObject({ data: { code: 'rule-twice' } });
		expect(await engineer.api.tolerance.list({ siteId })).toEqual([]);
		const other = await aSite(server);
		const { sheetId } = await engineer.api.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet: plainSheet });
		await expect(other.engineer.api.tolerance.discardDraft({ siteId: other.siteId, sheetId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await engineer.api.tolerance.discardDraft({ siteId, sheetId });
		expect(await engineer.api.tolerance.list({ siteId })).toEqual([]);
	});
});
