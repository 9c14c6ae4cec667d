import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { carryPoint, fitCovarianceAt } from '#shared/fit/carry-point.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite } from '../builders/a-site.ts';
import { aSetup, proposedReading, storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const control = [
	'name,e,n,h,sigma_plan,sigma_height',
	'K1,0,0,1,0.002,0.001',
	'K2,30,4,2,0.002,0.001',
	'K3,25,30,0,0.002,0.001',
	'K4,-5,28,3,0.002,0.001',
	'BM,,,5,,0.001',
].join('\n');
/** S1 stands true to the design; S2 is turned by a quarter and shifted: x = n − 5, y = 50 − e, z = h − 2. It knows one mark. */
const second = (e: number, n: number, h: number) => [n - 5, 50 - e, h - 2].map((value) => value.toFixed(4)).join(',');
const survey = [
	'setup,name,x,y,z,code',
	'S1,K1,0.0010,0.0005,1.0003,CP',
	'S1,K2,30.0004,4.0009,1.9997,CP',
	'S1,K3,24.9992,30.0007,0.0002,CP',
	'S1,K4,-5.0006,27.9993,3.0004,CP',
	'S1,BM,2,2,5.0004,BM',
	'S1,X1,40,10,4,TP',
	'S1,X2,45,25,1,TP',
	'S1,X9,1,1,1,TP',
	`S2,K2,${second(30.0011, 4.0004, 2.0006)},CP`,
	`S2,x-1,${second(40.0008, 10.0003, 4.0007)},TP`,
	`S2,X2,${second(45.0005, 25.0012, 0.9991)},TP`,
	'S2,P7,12.5,3.25,1,COL',
].join('\n');

async function tied(over: Parameters<typeof aSetup>[0] = {}) {
	const site = await aSite(server);
	const { controlSetId } = await storeControl(server, site.surveyor, control);
	const pointSigmaM = { plan: 0.002, height: 0.0015 };
	const { surveyId } = await storeSurvey(server, site.surveyor, survey, {
		setups: ['S1', 'S2'].map((name) => aSetup({ name, pointSigmaM, ...over })),
	});
	const { setups } = await site.surveyor.api.survey.get({ siteId: site.siteId, surveyId });
	const idOf = (name: string) => setups.find((setup) => setup.name === name)!.setupId;
	const input = { siteId: site.siteId, surveyId, controlSetId };
	const asked = { ...input, setups: ['S1', 'S2'].map((name) => ({ setupId: idOf(name), shelves: [] })) };
	return { ...site, input, asked, s1: idOf('S1'), s2: idOf('S2') };
}

describe('set-ups adjusted together', () => {
	it('are told by what ties them, and stored as a fit for each, all adopted and checked at once', async () => {
		const { surveyor, secondSurveyor, observer, siteId, input, asked, s1, s2 } = await tied();
		const outlook = await observer.api.fit.ties(input);
		expect(outlook.whyNot).toBeNull();
		expect(outlook.setups.map(({ name, knownCount, tieCount, standsAlone }) => [name, knownCount, tieCount, standsAlone])).toEqual([
			['S1', 5, 2, true],
			['S2', 1, 2, false],
		]);
		expect(outlook.ties.map(({ mark, isKnown, setupIds }) => [mark, isKnown, setupIds.length])).toEqual([
			['K2', true, 2],
			['X1', false, 2],
			['X2', false, 2],
		]);
		const alone = { siteId, setupId: s2, controlSetId: input.controlSetId, kind: 'levelled' as const, knownScale: null, shelves: [] };
		await expect(surveyor.api.fit.make(alone)).rejects.toMatchObject({ code: 'NO_FIT', data: { code: 'too-few-pairs' } });

		const made = await surveyor.api.fit.makeTogether(asked);
		expect(made.fits.map(({ number, setupName }) => [number, setupName])).toEqual([
			[1, 'S1'],
			[2, 'S2'],
		]);
		const fit = await observer.api.fit.get({ siteId, fitId: made.fits[1]!.fitId });
		expect(fit).toMatchObject({ state: 'made', kind: 'levelled', setupId: s2, madeWith: made });
		// x = n − 5, y = 50 − e, z = h − 2, back again.
		carryPoint(fit.result, [12.5, 3.25, 1]).forEach((value, k) => {
			expect(Math.abs(value - [46.75, 17.5, 3][k]!)).toBeLessThan(0.003);
		});
		expect(fit.network!.ties.map(({ mark }) => mark).sort()).toEqual(['BM', 'K1', 'K2', 'K3', 'K4', 'X1', 'X2']);
		expect(fit.network!.between).toHaveLength(1);
		expect(fit.network!.between[0]!.covariance.map((row) => row.length)).toEqual([4, 4, 4, 4]);
		const first = await observer.api.fit.get({ siteId, fitId: made.fits[0]!.fitId });
		// The second stands on the first, and is less sure in its middle than that one in its own.
		expect(fitCovarianceAt(fit.result, fit.result.origin)[0]![0]!).toBeGreaterThan(
			fitCovarianceAt(first.result, first.result.origin)[0]![0]!,
		);
		expect(first.inputsSha256).not.toBe(fit.inputsSha256);

		await surveyor.api.fit.adopt({ siteId, fitId: fit.fitId, reason: 'Ties agree.' });
		const states = async (setupId: string) => (await observer.api.fit.list({ siteId, setupId })).map(({ state }) => state);
		expect([await states(s1), await states(s2)]).toEqual([['adopted'], ['adopted']]);
		await secondSurveyor.api.fit.confirm({ siteId, fitId: first.fitId, note: 'Computed again.' });
		expect((await observer.api.fit.list({ siteId })).map(({ checkedBy }) => checkedBy)).toEqual([secondSurveyor.name, secondSurveyor.name]);
		await expect(surveyor.api.fit.adopt({ siteId, fitId: first.fitId, reason: 'Again.' })).rejects.toMatchObject({ code: 'CONFLICT' });
		const entries = await server.platform.db
			.select({ data: auditEntries.data })
			.from(auditEntries)
			.where(and(eq(auditEntries.siteId, siteId), eq(auditEntries.kind, 'fit-adopted')));
		expect(entries.map(({ data }) => data.networkId)).toEqual([made.networkId, made.networkId]);
		const report = await observer.api.fit.report({ siteId, fitId: fit.fitId });
		expect(report.size).toBeGreaterThan(10_000);
	});

	it('supersede what was adopted before, and have one hash for the same inputs', async () => {
		const { surveyor, siteId, input, asked, s1, s2 } = await tied();
		const single = await surveyor.api.fit.make({
			siteId,
			setupId: s1,
			controlSetId: input.controlSetId,
			kind: 'levelled',
			knownScale: null,
			shelves: [],
		});
		await surveyor.api.fit.adopt({ siteId, fitId: single.fitId, reason: 'Fits.' });
		const [one, other] = [await surveyor.api.fit.makeTogether(asked), await surveyor.api.fit.makeTogether(asked)];
		const hash = async (fitId: string) => (await surveyor.api.fit.get({ siteId, fitId })).inputsSha256;
		expect(await hash(one.fits[0]!.fitId)).toBe(await hash(other.fits[0]!.fitId));
		const held = {
			...asked,
			setups: [{ setupId: s1, shelves: [{ name: 'K4', shelf: 'held-back' as const, reason: null }] }, asked.setups[1]!],
		};
		const third = await surveyor.api.fit.makeTogether(held);
		// What changed for one set-up is another input for both.
		expect(await hash(third.fits[1]!.fitId)).not.toBe(await hash(one.fits[1]!.fitId));
		const detail = await surveyor.api.fit.get({ siteId, fitId: third.fits[0]!.fitId });
		expect(detail.result.pairs.filter(({ heldBack }) => heldBack).map(({ name }) => name)).toEqual(['K4']);
		await surveyor.api.fit.adopt({ siteId, fitId: third.fits[0]!.fitId, reason: 'All together.' });
		expect((await surveyor.api.fit.get({ siteId, fitId: single.fitId })).state).toBe('superseded');
		expect((await surveyor.api.fit.get({ siteId, fitId: third.fits[1]!.fitId })).state).toBe('adopted');
		expect((await surveyor.api.fit.list({ siteId, setupId: s2 })).map(({ state }) => state)).toEqual(['adopted', 'made', 'made']);
	});

	it('are refused in words where they cannot be, and nothing is stored', async () => {
		const { surveyor, siteId, input, asked, s1, s2 } = await tied();
		const twice = { ...asked, setups: [asked.setups[0]!, asked.setups[0]!] };
		await expect(surveyor.api.fit.makeTogether(twice)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'setup-twice' } });
		const badShelf = {
			...asked,
			setups: [{ setupId: s1, shelves: [{ name: 'K1', shelf: 'set-aside' as const, reason: null }] }, asked.setups[1]!],
		};
		await expect(surveyor.api.fit.makeTogether(badShelf)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'no-reason' } });
		const blank = await tied({ pointSigmaM: null });
		expect((await blank.surveyor.api.fit.ties(blank.input)).whyNot).toMatch(/neither the survey nor its set-up gives one/);
		await expect(blank.surveyor.api.fit.makeTogether(blank.asked)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'not-tied' } });
		// With its only mark set aside the network still hangs on S1; with all of S1's it hangs nowhere.
		const reason = 'Try.';
		const nothing = {
			...asked,
			setups: [
				{ setupId: s1, shelves: ['K1', 'K2', 'K3', 'K4'].map((name) => ({ name, shelf: 'set-aside' as const, reason })) },
				{ setupId: s2, shelves: [] },
			],
		};
		await expect(surveyor.api.fit.makeTogether(nothing)).rejects.toMatchObject({ code: 'NO_FIT', data: { code: 'too-few-pairs' } });
		expect(await surveyor.api.fit.list({ siteId })).toEqual([]);
		const other = await tied();
		for (const call of [
			() => other.surveyor.api.fit.ties({ ...other.input, surveyId: input.surveyId }),
			() => other.surveyor.api.fit.makeTogether({ ...other.asked, setups: asked.setups }),
		])
			await expect(call()).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});
});

describe('a level run', () => {
	const heights = 'name,height\nBM,3.0004\nS1,2.5\nS2,2.4\n';
	const observation = {
		targetHeightM: null,
		closingMm: null,
		closingArcSeconds: null,
		levelMisclosureMm: 9,
		levelStart: 'BM',
		levelClose: 'BM',
		levelLengthKm: 0.49,
		remarks: '',
	};

	it('comes with heights alone and its loop, is judged, and is fitted in height', async () => {
		const { surveyor, siteId } = await aSite(server);
		const { controlSetId } = await storeControl(
			server,
			surveyor,
			'name,e,n,h,sigma_plan,sigma_height\nBM,,,5,,0.001\nB2,1,1,1,0.001,0.001\n',
		);
		const reading = proposedReading(heights);
		await expect(storeSurvey(server, surveyor, heights, { reading })).rejects.toMatchObject({
			code: 'REFUSED',
			data: { code: 'level-run-not-said' },
		});
		const setups = [aSetup({ observation, pointSigmaM: { plan: 0.001, height: 0.001 } })];
		const { surveyId } = await storeSurvey(server, surveyor, heights, { reading, setups });
		const survey = await surveyor.api.survey.get({ siteId, surveyId });
		const { setupId } = survey.setups[0]!;
		const { findings } = await surveyor.api.fit.pairs({ siteId, setupId, controlSetId });
		expect(findings?.map(({ code }) => code)).toEqual(['level-misclosure']);
		const asked = { siteId, setupId, controlSetId, knownScale: null, shelves: [] };
		await expect(surveyor.api.fit.make({ ...asked, kind: 'levelled' })).rejects.toMatchObject({ code: 'NO_FIT' });
		const made = await surveyor.api.fit.make({ ...asked, kind: 'height' });
		expect(carryPoint(made.result, [0, 0, 2.5])[2]).toBeCloseTo(4.4996, 6);
		expect((await surveyor.api.fit.adopt({ siteId, fitId: made.fitId, reason: 'One benchmark.' })).state).toBe('adopted');
	});
});
