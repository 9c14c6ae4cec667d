import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { carryPoint } from '#shared/fit/carry-point.ts';
import { fits } from '../../server/db/schema/fit.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { aSetup, storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const demo = (name: string) => readFileSync(new URL(`../../fixtures/demo/${name}`, import.meta.url), 'utf8');
const truth = JSON.parse(demo('truth.json')) as {
	'survey-1': { setups: { name: string; surveyToDesign: { yawRad: number; shiftM: [number, number, number] } }[] };
};

/** The demo's control and survey 1 on a site of its own. */
async function surveyed(): Promise<BuiltSite & { controlSetId: string; setupIds: string[] }> {
	const site = await aSite(server);
	const { controlSetId } = await storeControl(server, site.surveyor, demo('control-design.csv'));
	const setups = [aSetup({ name: 'S1' }), aSetup({ name: 'S2' })];
	const { surveyId } = await storeSurvey(server, site.surveyor, demo('survey-1.csv'), { setups });
	const survey = await site.surveyor.api.survey.get({ siteId: site.siteId, surveyId });
	return { ...site, controlSetId, setupIds: survey.setups.map(({ setupId }) => setupId) };
}

/** A site with this control and this survey, each as CSV text. */
async function tied(control: string, survey: string, setup: Parameters<typeof aSetup>[0] = {}) {
	const site = await aSite(server);
	const { controlSetId } = await storeControl(server, site.surveyor, control);
	const { surveyId } = await storeSurvey(server, site.surveyor, survey, { setups: [aSetup(setup)] });
	const { setups } = await site.surveyor.api.survey.get({ siteId: site.siteId, surveyId });
	const setupId = setups[0]!.setupId;
	return { ...site, input: { siteId: site.siteId, setupId, controlSetId } };
}
const plainFit = { kind: 'levelled' as const, knownScale: null, shelves: [] };

describe('pairs', () => {
	it('are the marks that both have, repeats averaged, σ from both sides', async () => {
		const { siteId, surveyor, setupIds, controlSetId } = await surveyed();
		const setupId = setupIds[0]!;
		const { pairs, findings, sigmaNote, notes, controlWithoutTarget, targetsWithoutControl } = await surveyor.api.fit.pairs({
			siteId,
			setupId,
			controlSetId,
		});
		const rows = demo('survey-1.csv')
			.split('\n')
			.filter((line) => line.startsWith('S1,') && line.endsWith(',CP'));
		const sighted = new Map<string, string[][]>();
		for (const cells of rows.map((line) => line.split(','))) sighted.set(cells[1]!, [...(sighted.get(cells[1]!) ?? []), cells]);
		expect(pairs.map(({ name }) => name).sort()).toEqual([...sighted.keys()].sort());
		expect(sigmaNote).toBeNull();
		expect(targetsWithoutControl).toEqual([]);
		expect([...controlWithoutTarget, ...sighted.keys()].sort()).toEqual(['C1', 'C2', 'C3', 'C4', 'C5', 'C6', 'C7', 'C8', 'C9']);
		for (const { name, survey, surveySigma } of pairs) {
			const own = sighted.get(name)!;
			for (const axis of [0, 1, 2] as const) {
				const mean = own.reduce((sum, cells) => sum + Number(cells[2 + axis]), 0) / own.length;
				expect(survey[axis], name).toBeCloseTo(mean, 9);
				expect(surveySigma?.[axis], name).toBeCloseTo(Number(own[0]![5 + axis]) / Math.sqrt(own.length), 12);
			}
		}
		expect(notes?.join()).toMatch(/was sighted 2 times/);
		// The demonstration's instrument stood still.
		expect(findings).toBeUndefined();
	});

	it('say why σ are not used, and what was taken for the same mark', async () => {
		const { surveyor, input } = await tied(
			'name,e,n,h,sigma_plan,sigma_height\nT1,0,0,0,0.002,0.001\nT 2,10,0,0,,\nT3,0,10,1,0.002,0.001\n',
			'name,x,y,z,code\nT1,0,0,0,\nt-2,10,0,0,\nT3 ,0,10,1,\nT9,1,1,1,TGT\n',
		);
		const found = await surveyor.api.fit.pairs(input);
		expect(found.pairs.map(({ name }) => name)).toEqual(['T 2', 'T1', 'T3']);
		expect(found.pairs.some(({ surveySigma, controlSigma }) => surveySigma !== undefined || controlSigma !== undefined)).toBe(false);
		expect(found.sigmaNote).toMatch(/control list gives none for T 2.*neither the survey nor its set-up gives one for T 2, T1, T3/);
		expect(found.notes).toEqual([expect.stringContaining('“t-2” was taken for control point “T 2”')]);
		expect(found.targetsWithoutControl).toEqual(['T9']);
	});
});

describe('fits', () => {
	it('are computed on the server to the truth, adopted once, superseded by the next', async () => {
		const { siteId, surveyor, secondSurveyor, observer, setupIds, controlSetId } = await surveyed();
		const setupId = setupIds[0]!;
		const shelves = [{ name: 'C4', shelf: 'held-back' as const, reason: null }];
		const made = await surveyor.api.fit.make({ siteId, setupId, controlSetId, kind: 'levelled', knownScale: null, shelves });
		expect(made).toMatchObject({ number: 1, state: 'made', kind: 'levelled', isNewest: true, madeBy: surveyor.name, adoptedBy: null });
		expect(made.result.pairs.filter(({ heldBack }) => heldBack).map(({ name }) => name)).toEqual(['C4']);
		const { yawRad, shiftM } = truth['survey-1'].setups[0]!.surveyToDesign;
		const place = [20, -90, 10] as const;
		const [x, y, z] = carryPoint(made.result, place);
		const [cos, sin] = [Math.cos(yawRad), Math.sin(yawRad)];
		expect(Math.abs(x - (cos * place[0] - sin * place[1] + shiftM[0]))).toBeLessThan(0.004);
		expect(Math.abs(y - (sin * place[0] + cos * place[1] + shiftM[1]))).toBeLessThan(0.004);
		expect(Math.abs(z - (place[2] + shiftM[2]))).toBeLessThan(0.004);

		const adopted = await surveyor.api.fit.adopt({ siteId, fitId: made.fitId, reason: 'Held-back mark agrees.' });
		expect(adopted).toMatchObject({ state: 'adopted', adoptedBy: surveyor.name, adoptedReason: 'Held-back mark agrees.' });
		const next = await secondSurveyor.api.fit.make({ siteId, setupId, controlSetId, ...plainFit });
		await secondSurveyor.api.fit.adopt({ siteId, fitId: next.fitId, reason: 'All marks in.' });
		const states = (await observer.api.fit.list({ siteId, setupId })).map(({ number, state }) => [number, state]);
		expect(states).toEqual([
			[2, 'adopted'],
			[1, 'superseded'],
		]);
		await expect(surveyor.api.fit.adopt({ siteId, fitId: made.fitId, reason: 'Again.' })).rejects.toMatchObject({ code: 'CONFLICT' });
		expect((await observer.api.fit.list({ siteId }))[0]).toMatchObject({ number: 2, state: 'adopted' });
		expect(await observer.api.fit.get({ siteId, fitId: made.fitId })).toMatchObject({ state: 'superseded', result: made.result });
		const kinds = await server.platform.db.select({ kind: auditEntries.kind }).from(auditEntries).where(eq(auditEntries.siteId, siteId));
		expect(kinds.filter(({ kind }) => kind === 'fit-adopted')).toHaveLength(2);
	});

	it('have the same hash for the same inputs and another for others', async () => {
		const control = 'name,e,n,h\nT1,0,0,0\nT2,10,0,0\nT3,0,10,1\n';
		const survey = 'name,x,y,z\nT1,0,0.001,0\nT2,10,0,0\nT3,0,10,1.002\n';
		const hashOf = async (text: string, knownScale: number | null) => {
			const { surveyor, input } = await tied(control, text);
			return (await surveyor.api.fit.make({ ...input, kind: 'levelled', knownScale, shelves: [] })).inputsSha256;
		};
		const first = await hashOf(survey, null);
		expect(first).toMatch(/^[0-9a-f]{64}$/);
		expect(await hashOf(survey, null)).toBe(first);
		expect(await hashOf(survey, 0.9998)).not.toBe(first);
		expect(await hashOf(survey.replace('0.001', '0.002'), null)).not.toBe(first);
		expect(first).not.toBe(createHash('sha256').update('').digest('hex'));
	});

	it('are refused with the reason where the pairs do not determine them, and nothing is stored', async () => {
		const onLine = 'name,x,y,z\nT1,0,0,0\nT2,1,1,1\nT3,2,2,2\n';
		const cases = [
			{ text: 'name,x,y,z\nT1,0,0,0\n', kind: 'levelled' as const, code: 'too-few-pairs' },
			{ text: onLine, kind: 'free' as const, code: 'on-a-line' },
			{ text: 'name,x,y,z\nT1,5,5,0\nT2,5,5,3\n', kind: 'levelled' as const, code: 'on-a-line' },
			{ text: 'name,x,y,z\nQ,0,0,0\n', kind: 'height' as const, code: 'too-few-pairs' },
		];
		for (const { text, kind, code } of cases) {
			const control = text.replace('Q', 'T1');
			const { surveyor, input } = await tied(control, text);
			await expect(surveyor.api.fit.make({ ...input, ...plainFit, kind }), `${kind} ${code}`).rejects.toMatchObject({
				code: 'NO_FIT',
				data: { code },
				message: expect.stringMatching(/^.{15,}\.$/),
			});
			expect(await server.platform.db.select().from(fits).where(eq(fits.siteId, input.siteId))).toEqual([]);
		}
		const bench = await tied('name,e,n,h\nT1,0,0,0\nT2,9,0,0\nT3,0,9,0\nBM,,,1\n', 'name,x,y,z\nT1,0,0,0\nT2,9,0,0\nT3,0,9,0\nBM,4,4,1\n');
		await expect(bench.surveyor.api.fit.make({ ...bench.input, ...plainFit, kind: 'free' })).rejects.toMatchObject({
			code: 'NO_FIT',
			message: expect.stringContaining('“BM” has no plan position'),
		});
		for (const [shelves, code] of [
			[[{ name: 'XX', shelf: 'held-back' as const, reason: null }], 'no-such-pair'],
			[[{ name: 'T1', shelf: 'set-aside' as const, reason: null }], 'no-reason'],
		] as const) {
			const call = bench.surveyor.api.fit.make({ ...bench.input, ...plainFit, shelves: [...shelves] });
			await expect(call).rejects.toMatchObject({ code: 'REFUSED', data: { code } });
		}
	});

	it('may be made of any kind, but adopted only as the instrument stood', async () => {
		const text = 'name,x,y,z\nT1,0,0,0\nT2,10,0,0.5\nT3,0,10,1\nT4,8,9,3\n';
		const cases = [
			{ setup: { levelling: 'levelled' as const, bringsScale: true }, may: ['height', 'levelled'] },
			{ setup: { levelling: 'levelled' as const, bringsScale: false }, may: ['height', 'levelled', 'levelled-scaled'] },
			{ setup: { levelling: 'free' as const, bringsScale: true }, may: ['free'] },
			{ setup: { levelling: 'free' as const, bringsScale: false }, may: ['free', 'free-scaled'] },
		];
		for (const { setup, may } of cases) {
			const { surveyor, input } = await tied(text, text, setup);
			for (const kind of ['height', 'levelled', 'levelled-scaled', 'free', 'free-scaled'] as const) {
				const { fitId } = await surveyor.api.fit.make({ ...input, ...plainFit, kind });
				const adopting = surveyor.api.fit.adopt({ siteId: input.siteId, fitId, reason: 'Try.' });
				if (may.includes(kind)) expect((await adopting).state).toBe('adopted');
				else await expect(adopting, kind).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'wrong-kind' } });
			}
		}
	});

	it('are stale once the control has a newer set', async () => {
		const text = 'name,x,y,z\nT1,0,0,0\nT2,10,0,0.5\nT3,0,10,1\n';
		const { surveyor, input } = await tied(text, text);
		const { fitId } = await surveyor.api.fit.make({ ...input, ...plainFit });
		await storeControl(server, surveyor, text.replace('10,0,0.5', '10,0,0.501'));
		await expect(surveyor.api.fit.adopt({ siteId: input.siteId, fitId, reason: 'Late.' })).rejects.toMatchObject({
			code: 'STALE',
			status: 409,
		});
		expect(await surveyor.api.fit.get({ siteId: input.siteId, fitId })).toMatchObject({ state: 'made', isNewest: false });
	});

	it('end with one adopted when two people adopt at once', async () => {
		const text = 'name,x,y,z\nT1,0,0,0\nT2,10,0,0.5\nT3,0,10,1\n';
		const { surveyor, secondSurveyor, input } = await tied(text, text);
		const adopt = (person: typeof surveyor, fitId: string) => person.api.fit.adopt({ siteId: input.siteId, fitId, reason: 'Mine.' });
		for (let round = 0; round < 4; round++) {
			const { fitId } = await surveyor.api.fit.make({ ...input, ...plainFit });
			const both = await Promise.allSettled([adopt(surveyor, fitId), adopt(secondSurveyor, fitId)]);
			expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
			expect(both.find((one) => one.status === 'rejected')?.reason).toMatchObject({ code: 'CONFLICT' });
		}
		const [one, other] = [await surveyor.api.fit.make({ ...input, ...plainFit }), await surveyor.api.fit.make({ ...input, ...plainFit })];
		await Promise.allSettled([adopt(surveyor, one.fitId), adopt(secondSurveyor, other.fitId)]);
		const states = (await surveyor.api.fit.list({ siteId: input.siteId })).map(({ state }) => state);
		expect(states.filter((state) => state === 'adopted')).toHaveLength(1);
		expect(states.filter((state) => state === 'made')).toHaveLength(0);
	});

	it('hide from another site, whose things cannot be named either', async () => {
		const text = 'name,x,y,z\nT1,0,0,0\nT2,10,0,0.5\nT3,0,10,1\n';
		const mine = await tied(text, text);
		const { fitId } = await mine.surveyor.api.fit.make({ ...mine.input, ...plainFit });
		const other = await tied(text, text);
		const { api, siteId } = other.surveyor;
		for (const call of [
			() => api.fit.get({ siteId, fitId }),
			() => api.fit.adopt({ siteId, fitId, reason: 'Not mine.' }),
			() => api.fit.pairs({ ...other.input, setupId: mine.input.setupId }),
			() => api.fit.pairs({ ...other.input, controlSetId: mine.input.controlSetId }),
			() => api.fit.make({ ...other.input, setupId: mine.input.setupId, ...plainFit }),
		]) {
			await expect(call()).rejects.toMatchObject({ code: 'NOT_FOUND' });
		}
		expect(await api.fit.list({ siteId, setupId: mine.input.setupId })).toEqual([]);
	});
});
