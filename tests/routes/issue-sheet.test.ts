import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, expect, it } from 'vitest';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { sites } from '../../server/db/schema/site.ts';
import { aSite } from '../builders/a-site.ts';
import { asBuilt, issuedSheet, plainSheet } from '../builders/as-built.ts';
import { followJob } from '../builders/follow-job.ts';
import { readModel } from '../builders/read-model.ts';
import { storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

/** A site with one published check: a column's face 34 mm proud, a wall's 60 mm, all else in its place. */
async function flagged() {
	const site = await aSite(server);
	const { siteId, engineer, surveyor } = site;
	const file = readFileSync(new URL('../../fixtures/ifc/made-frame-mm-ifc4x3.ifc', import.meta.url));
	const { revision } = await readModel(server, engineer, 'frame.ifc', file, { newName: 'Frame' });
	const { revisionId } = revision;
	const checkpoints = await surveyor.api.model.checkpoints({ siteId, revisionId });
	const elements = await surveyor.api.model.elements({ siteId, revisionId });
	const faceOf = (wanted: string) => {
		const ids = new Set(elements.filter((one) => one.class === wanted).map(({ elementId }) => elementId));
		return checkpoints.find(({ elementId, characteristic }) => ids.has(elementId) && characteristic === 'face')!.id;
	};
	const offMm = new Map([
		[faceOf('IfcColumn'), 34],
		[faceOf('IfcWall'), 60],
	]);
	const sheetId = await issuedSheet(server, engineer);
	const { control, survey } = asBuilt(checkpoints, ({ id }) => offMm.get(id) ?? 0);
	const { controlSetId } = await storeControl(server, surveyor, control);
	const said = {
		name: 'S',
		stage: 'as-cast' as const,
		surveyedOn: '2025-11-26',
		observer: 'V. O.',
		instrument: 'Total station',
		serial: '1',
	};
	const { surveyId } = await storeSurvey(server, surveyor, survey, { survey: said });
	const { setups } = await surveyor.api.survey.get({ siteId, surveyId });
	const setupId = setups[0]!.setupId;
	const { fitId } = await surveyor.api.fit.make({ siteId, setupId, controlSetId, kind: 'levelled', knownScale: null, shelves: [] });
	await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Residuals are nil.' });
	const { checkId, jobId } = await surveyor.api.check.run({ siteId, revisionId, surveyId, sheetId });
	expect((await followJob(surveyor.api, siteId, jobId)).state).toBe('done');
	const { planSha256 } = await surveyor.api.check.publishPlan({ siteId, checkId });
	const answerBy = new Date(Date.now() + 86_400_000);
	await surveyor.api.check.publish({ siteId, checkId, answerBy, planSha256 });
	return site;
}

it('a sheet that is issued lets the flags lapse that it leaves nothing of, says which limits, and leaves the others', async () => {
	const { siteId, engineer, surveyor, owner, contractor, observer } = await flagged();
	const { api } = engineer;
	const rules = [{ id: 'all', match: {}, lowerMm: -45, upperMm: 45, shape: 'disc' as const }];
	const sheet: ToleranceSheet = { ...plainSheet, name: 'Wider', rules };
	const weight = await api.tolerance.weigh({ siteId, sheet });
	expect(weight.changes.map(({ was, is, count, first }) => [was, is, count, first[0]?.wasMm, first[0]?.isMm])).toEqual([
		['outside', 'within', 1, [-20, 20], [-45, 45]],
	]);
	const { sheetId, contentSha256 } = await api.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet });
	const issue = { siteId, sheetId, seenSha256: contentSha256, reason: 'Agreed with the owner.' };
	const refused = await Promise.allSettled(
		[surveyor, owner, contractor, observer].flatMap((person) => [
			person.api.tolerance.issue(issue),
			person.api.tolerance.saveDraft({ siteId, sheetId, seenSha256: contentSha256, sheet }),
			person.api.tolerance.discardDraft({ siteId, sheetId }),
		]),
	);
	expect(new Set(refused.map((one) => (one.status === 'rejected' ? one.reason.code : 'let in')))).toEqual(new Set(['FORBIDDEN']));

	const { db } = server.platform;
	await db.update(sites).set({ needsSecondFactor: true }).where(eq(sites.id, siteId));
	await expect(api.tolerance.issue(issue)).rejects.toMatchObject({ data: { code: 'second-factor-needed' } });
	expect((await api.tolerance.get({ siteId, sheetId })).state).toBe('draft');
	await db.update(sites).set({ needsSecondFactor: false }).where(eq(sites.id, siteId));

	await api.tolerance.issue(issue);
	const flags = (await api.flag.list({ siteId })).toSorted((a, b) => a.worstMm - b.worstMm);
	expect(flags.map(({ state, lapsedBecause, lapsedWords }) => [state, lapsedBecause, lapsedWords])).toEqual([
		['lapsed', 'limits-changed', 'Limits changed: −20 to +20 mm before, −45 to +45 mm by revision 2 of Wider.'],
		['open', null, null],
	]);
}, 180_000);
