import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite } from '../builders/a-site.ts';
import { storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const places: [string, number, number, number][] = [
	['T1', 0, 0, 0],
	['T2', 31, 2, 1],
	['T3', 28, 24, 0.5],
	['T4', -3, 19, 2],
];
const control = `name,e,n,h,sigma_plan,sigma_height\n${places.map((cells) => `${cells.join(',')},0.001,0.001`).join('\n')}\n`;

/** Targets in rows 2 to 5, work in 6 and 7, and T1 again in row 8, off by so much in height. */
const survey = (offM: number) =>
	[
		'name,x,y,z,sigma_x,sigma_y,sigma_z,code',
		...places.map((cells) => `${cells.join(',')},0.001,0.001,0.001,CP`),
		'W1,5,5,1,0.001,0.001,0.001,',
		'W2,6,5,1,0.001,0.001,0.001,',
		`T1,0,0,${offM},0.001,0.001,0.001,CP`,
		'',
	].join('\n');

async function sighted(offM: number) {
	const site = await aSite(server);
	const { controlSetId } = await storeControl(server, site.surveyor, control);
	const { surveyId } = await storeSurvey(server, site.surveyor, survey(offM));
	const { setups } = await site.surveyor.api.survey.get({ siteId: site.siteId, surveyId });
	const { siteId } = site;
	const setupId = setups[0]!.setupId;
	return { ...site, surveyId, input: { siteId, setupId, controlSetId }, rows: { siteId, setupId, fromRow: 6, toRow: null } };
}

describe('a set-up that moved', () => {
	it('is found by its closing sight, in the pairs and in the kept fit, and not where it stood still', async () => {
		const still = await sighted(0.002);
		expect((await still.surveyor.api.fit.pairs(still.input)).findings).toBeUndefined();
		const { surveyor, input, siteId } = await sighted(0.012);
		const { findings } = await surveyor.api.fit.pairs(input);
		expect(findings).toMatchObject([
			{ code: 'moved-setup', pairs: ['T1'], evidence: { axis: 'z', firstRow: 2, lastRow: 8, lastGoodRow: 5, isBySigma: true } },
		]);
		expect(findings?.[0]?.evidence.differenceMm).toBeCloseTo(12, 6);
		const { fitId } = await surveyor.api.fit.make({ ...input, kind: 'levelled', knownScale: null, shelves: [] });
		expect((await surveyor.api.fit.get({ siteId, fitId })).pairs.findings).toEqual(findings);
	});

	it('has what came after voided and taken back, once each, and fits made before stay', async () => {
		const { surveyor, observer, input, rows, siteId, surveyId } = await sighted(0.012);
		const { fitId } = await surveyor.api.fit.make({ ...input, kind: 'levelled', knownScale: null, shelves: [] });
		await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Before it was seen.' });
		const before = await surveyor.api.fit.get({ siteId, fitId });
		const both = await Promise.allSettled([1, 2].map(() => surveyor.api.survey.voidPoints({ ...rows, reason: 'Tripod knocked.' })));
		expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		expect(both.find(({ status }) => status === 'fulfilled')).toMatchObject({
			value: { pointCount: 3, leftCount: 4, adoptedFitNumber: 1 },
		});
		expect(both.find(({ status }) => status === 'rejected')).toMatchObject({ reason: { data: { code: 'no-such-points' } } });
		const { points } = await observer.api.survey.points({ siteId, surveyId });
		expect(points.map(({ row, voidedReason }) => [row, voidedReason])).toEqual([
			...[2, 3, 4, 5].map((row) => [row, undefined]),
			...[6, 7, 8].map((row) => [row, 'Tripod knocked.']),
		]);
		const pairs = await surveyor.api.fit.pairs(input);
		expect(pairs.findings).toBeUndefined();
		expect(pairs.pairs.find(({ name }) => name === 'T1')?.survey).toEqual([0, 0, 0]);
		expect(await surveyor.api.fit.get({ siteId, fitId })).toEqual(before);
		await surveyor.api.survey.unvoidPoints({ ...rows, fromRow: 7, toRow: 8, reason: 'Only W1 was.' });
		const after = await observer.api.survey.points({ siteId, surveyId });
		expect(after.points.flatMap(({ row, voidedReason }) => (voidedReason === undefined ? [] : [row]))).toEqual([6]);
		expect((await surveyor.api.fit.pairs(input)).findings).toHaveLength(1);
		const entries = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.subjectId, input.setupId));
		expect(entries.map(({ kind, data }) => [kind, data.points, data.reason]).sort()).toEqual([
			['points-restored', 2, 'Only W1 was.'],
			['points-voided', 3, 'Tripod knocked.'],
		]);
	});

	it('is no other site’s to void, nor an observer’s', async () => {
		const { observer, rows } = await sighted(0.012);
		await expect(observer.api.survey.voidPoints({ ...rows, reason: 'x' })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		const other = await aSite(server);
		const call = other.surveyor.api.survey.voidPoints({ ...rows, siteId: other.siteId, reason: 'x' });
		await expect(call).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});
});
