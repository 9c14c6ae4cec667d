import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { blankSetupObservation, blankSurveyObservation } from '#shared/survey/observation-record.ts';
import { makePointList } from '../../fixtures/make-point-list.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { surveyPoints, surveys } from '../../server/db/schema/survey.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { followJob } from '../builders/follow-job.ts';
import { aSetup, proposedReading, storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let site: BuiltSite;
beforeAll(async () => {
	server = await openTestServer({ largestUploadBytes: 20_000_000 });
	site = await aSite(server);
});
afterAll(() => server.close());

const csv = (name: string) => readFileSync(new URL(`../../fixtures/csv/${name}`, import.meta.url));
const demo = (name: string) => readFileSync(new URL(`../../fixtures/demo/${name}`, import.meta.url));
const surveyCount = async (siteId: string) =>
	(await server.platform.db.select({ id: surveys.id }).from(surveys).where(eq(surveys.siteId, siteId))).length;

describe('surveys', () => {
	it('stores points by set-up, and tells targets by the newest control', async () => {
		await storeControl(server, site.surveyor, demo('control-design.csv'));
		const setups = [aSetup({ name: 'S1' }), aSetup({ name: 'S2', commonMm: 2 })];
		const { surveyId, jobId } = await storeSurvey(server, site.surveyor, demo('survey-1.csv'), { setups });
		expect(jobId).toBeNull();
		const lines = demo('survey-1.csv').toString('utf8').trim().split('\n').slice(1);
		const survey = await site.observer.api.survey.get({ siteId: site.siteId, surveyId });
		expect(survey).toMatchObject({ number: 1, state: 'ready', pointCount: lines.length, stage: 'as-cast', surveyedOn: '2025-11-26' });
		const countIn = (setup: string) => lines.filter((line) => line.startsWith(`${setup},`)).length;
		expect(survey.setups.map(({ name, pointCount, commonMm }) => [name, pointCount, commonMm])).toEqual([
			['S1', countIn('S1'), 0.5],
			['S2', countIn('S2'), 2],
		]);
		for (const { name, targetCount } of survey.setups) {
			const targets = new Set(
				lines.filter((line) => line.startsWith(`${name},`) && line.endsWith(',CP')).map((line) => line.split(',')[1]),
			);
			expect(targetCount, name).toBe(targets.size);
		}
		const page = await site.observer.api.survey.points({ siteId: site.siteId, surveyId, offset: 1, limit: 2 });
		expect(page.total).toBe(lines.length);
		expect(page.points.map(({ name, surveyM, sigmaM, isTarget }) => [name, ...surveyM, ...(sigmaM ?? []), isTarget])).toEqual(
			lines.slice(1, 3).map((line) => {
				const [, name, ...cells] = line.split(',');
				return [name, ...cells.slice(0, 6).map(Number), true];
			}),
		);
		const all = await site.observer.api.survey.points({ siteId: site.siteId, surveyId });
		expect(all.points.filter(({ isTarget }) => isTarget)).toHaveLength(lines.filter((line) => line.endsWith(',CP')).length);
	});

	it('refuses set-ups that the file and the form do not share, either way', async () => {
		const fresh = await aSite(server);
		const store = (names: string[]) =>
			storeSurvey(server, fresh.surveyor, demo('survey-1.csv'), { setups: names.map((name) => aSetup({ name })) });
		await expect(store(['S1'])).rejects.toMatchObject({ code: 'REFUSED', message: expect.stringContaining('the file has "S2"') });
		await expect(store(['S1', 'S2', 'S3'])).rejects.toMatchObject({
			message: expect.stringContaining('"S3", of which the file has no point'),
		});
		await expect(store(['S1', 'S2', 'S2'])).rejects.toMatchObject({ message: expect.stringContaining('twice') });
		expect(await surveyCount(fresh.siteId)).toBe(0);
	});

	it.each([
		['a column missing', 'missing-columns.csv', /No column is named for height/],
		['text for a number', 'text-for-a-number.csv', /is not a number/],
		['empty cells', 'empty-cells.csv', /has no (easting|northing|height)/],
		['a zip file', 'zip-renamed.csv', /ZIP/],
	])('refuses a file with %s whole', async (_, fileName, sentence) => {
		const fresh = await aSite(server);
		const error = await storeSurvey(server, fresh.surveyor, csv(fileName)).catch((thrown: unknown) => thrown);
		expect(error).toMatchObject({ code: 'FAULTS' });
		const { data } = error as { data: { faults: { message: string }[] } };
		expect(data.faults.map(({ message }) => message).join('\n')).toMatch(sentence);
		expect(await surveyCount(fresh.siteId)).toBe(0);
	});

	it('keeps a name that stands twice in a set-up as a repeat', async () => {
		const fresh = await aSite(server);
		const { surveyId } = await storeSurvey(server, fresh.surveyor, 'name,x,y,z\nT1,1,2,3\nT1,1.001,2,3\n');
		const { points } = await fresh.surveyor.api.survey.points({ siteId: fresh.siteId, surveyId });
		expect(points.map(({ name, row }) => [name, row])).toEqual([
			['T1', 2],
			['T1', 3],
		]);
	});

	it('stores 200 000 rows by a job while others go on, every row once', async () => {
		const fresh = await aSite(server);
		const list = makePointList(7, 200_000);
		const { surveyId, jobId } = await storeSurvey(server, fresh.surveyor, list);
		expect(jobId).not.toBeNull();
		const asked = { siteId: fresh.siteId, surveyId };
		const before = await fresh.surveyor.api.survey.get(asked);
		if (before.state === 'storing') expect(before.pointCount).toBe(0);
		expect(await followJob(fresh.surveyor.api, fresh.siteId, jobId!)).toMatchObject({ state: 'done', subjectId: surveyId });
		expect(await fresh.surveyor.api.survey.get(asked)).toMatchObject({ state: 'ready', pointCount: 200_000 });
		const lines = list.trim().split('\n');
		const { total, points } = await fresh.surveyor.api.survey.points({ ...asked, offset: 199_998 });
		expect(total).toBe(200_000);
		expect(points.map(({ row }) => row)).toEqual([lines.length - 1, lines.length]);
		expect(points.map(({ name }) => name)).toEqual(lines.slice(-2).map((line) => line.split(',')[0]));
		const kinds = await server.platform.db
			.select({ kind: auditEntries.kind })
			.from(auditEntries)
			.where(eq(auditEntries.subjectId, surveyId));
		expect(kinds).toEqual([{ kind: 'survey-stored' }]);
	}, 240_000);

	it('says of a long file why it is not stored, and keeps none of its points', async () => {
		const fresh = await aSite(server);
		const list = `${makePointList(8, 10_500)}LAST,1,2,N/A\n`;
		const broken = await storeSurvey(server, fresh.surveyor, list);
		const end = await followJob(fresh.surveyor.api, fresh.siteId, broken.jobId!);
		expect(end).toMatchObject({ state: 'failed', reason: expect.stringMatching(/^1 row of 10501 .*'N\/A' is not a number\.$/) });
		const asked = { siteId: fresh.siteId, surveyId: broken.surveyId };
		expect(await fresh.surveyor.api.survey.get(asked)).toMatchObject({ state: 'failed', reason: end.reason, pointCount: 0 });
		expect(await server.platform.db.select().from(surveyPoints).where(eq(surveyPoints.surveyId, broken.surveyId))).toEqual([]);
		const other = await storeSurvey(server, fresh.surveyor, makePointList(8, 10_500), { setups: [aSetup({ name: 'S9' })] });
		const differ = await followJob(fresh.surveyor.api, fresh.siteId, other.jobId!);
		expect(differ).toMatchObject({ state: 'failed', reason: expect.stringContaining('"S9"') });
	});

	it('asks for the order of columns by the form, and remembers it', async () => {
		const fresh = await aSite(server);
		const content = csv('penzd-no-header.csv');
		const reading = proposedReading(content, { columns: { name: 0, easting: 1, northing: 2, height: 3, code: 4 } });
		await storeSurvey(server, fresh.surveyor, content, { reading });
		expect((await fresh.surveyor.api.site.get({ siteId: fresh.siteId })).columnOrder).toBe('PENZD');
	});

	it('hides another site’s surveys', async () => {
		const other = await aSite(server);
		const [survey] = await site.surveyor.api.survey.list({ siteId: site.siteId });
		const { api, siteId } = other.surveyor;
		const surveyId = survey!.surveyId;
		await expect(api.survey.get({ siteId, surveyId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(api.survey.points({ siteId, surveyId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		expect(await api.survey.list({ siteId })).toEqual([]);
	});
});

describe('how a survey was measured', () => {
	it('is kept as far as it was said, and nothing is made of what was not', async () => {
		const own = await aSite(server);
		const observation = { ...blankSurveyObservation, temperatureC: -2.5, ppmApplied: 'in-instrument' as const, fieldCheck: 'no' as const };
		const setups = [aSetup({ observation: { ...blankSetupObservation, closingMm: 1.4 } })];
		const form = { name: 'S', stage: 'as-cast' as const, surveyedOn: '2026-12-01', observer: 'A', instrument: 'B', serial: 'C' };
		const text = 'name,x,y,z\nT1,0,0,0\n';
		const { surveyId } = await storeSurvey(server, own.surveyor, text, { setups, survey: { ...form, observation } });
		const survey = await own.observer.api.survey.get({ siteId: own.siteId, surveyId });
		expect(survey.observation).toEqual(observation);
		expect(survey.setups[0]?.observation).toMatchObject({ closingMm: 1.4, targetHeightM: null });
		const silent = await storeSurvey(server, own.surveyor, text, { setups: [aSetup()] });
		expect(await own.observer.api.survey.get({ siteId: own.siteId, surveyId: silent.surveyId })).not.toHaveProperty('observation');
	});
});
