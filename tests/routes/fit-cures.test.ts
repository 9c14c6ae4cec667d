import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Shelving } from '#shared/fit/contract.ts';
import { fits } from '../../server/db/schema/fit.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { sites } from '../../server/db/schema/site.ts';
import { aSite } from '../builders/a-site.ts';
import { aSetup, storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const places: Record<string, readonly [number, number, number]> = {
	T1: [0, 0, 0],
	T2: [31, 2, 1],
	T3: [28, 24, 0.5],
	T4: [-3, 19, 2],
	T5: [12, 40, 1.2],
	T6: [44, 33, 3],
};
const control = csv('name,e,n,h,sigma_plan,sigma_height', places, ',0.001,0.001');
const sighted = (over: typeof places = {}) =>
	csv('name,x,y,z,sigma_x,sigma_y,sigma_z,code', { ...places, ...over }, ',0.001,0.001,0.001,CP');

function csv(head: string, points: typeof places, tail: string): string {
	return `${[head, ...Object.entries(points).map(([name, place]) => `${name},${place.join(',')}${tail}`)].join('\n')}\n`;
}

async function tied(survey: string, setup: Parameters<typeof aSetup>[0] = {}) {
	const site = await aSite(server);
	const { controlSetId } = await storeControl(server, site.surveyor, control);
	const { surveyId } = await storeSurvey(server, site.surveyor, survey, { setups: [aSetup(setup)] });
	const { setups } = await site.surveyor.api.survey.get({ siteId: site.siteId, surveyId });
	return { ...site, input: { siteId: site.siteId, setupId: setups[0]!.setupId, controlSetId } };
}
const levelled = { kind: 'levelled' as const, knownScale: null };
const shelving = (over: Partial<Shelving> & { name: string }): Shelving => ({ shelf: 'in-the-fit', reason: 'For a test.', ...over });

describe('cures', () => {
	it('use a target in plan only, whose height was wrong', async () => {
		const { surveyor, input } = await tied(sighted({ T3: [28, 24, 0.595] }));
		const whole = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [] });
		const planOnly = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [shelving({ name: 'T3', use: 'plan' })] });
		expect(whole.result.rms).toBeGreaterThan(0.03);
		expect(planOnly.result.rms).toBeLessThan(1e-6);
		const t3 = planOnly.result.pairs.find(({ name }) => name === 'T3');
		expect(t3?.residual[2]).toBeNull();
		expect(t3?.residual[0]).toBeCloseTo(0, 9);
		expect(planOnly.result.redundancy).toBe(whole.result.redundancy - 1);
		expect(planOnly.changes).toEqual(['T3 used in plan only: For a test.']);
		// What was kept computes again to the same from itself.
		expect((await surveyor.api.fit.get({ siteId: input.siteId, fitId: planOnly.fitId })).shelves[0]).toMatchObject({ use: 'plan' });
	});

	it('put exchanged labels back, both or neither', async () => {
		const { surveyor, input } = await tied(sighted({ T2: places.T3!, T3: places.T2! }));
		const exchanged = [shelving({ name: 'T2', exchangedWith: 'T3' }), shelving({ name: 'T3', exchangedWith: 'T2' })];
		expect((await surveyor.api.fit.make({ ...input, ...levelled, shelves: [] })).result.rms).toBeGreaterThan(1);
		const cured = await surveyor.api.fit.make({ ...input, ...levelled, shelves: exchanged });
		expect(cured.result.rms).toBeLessThan(1e-6);
		expect(cured.result.pairs).toHaveLength(6);
		const lopsided = surveyor.api.fit.make({ ...input, ...levelled, shelves: exchanged.slice(0, 1) });
		await expect(lopsided).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'not-mutual' } });
		const unsaid = surveyor.api.fit.make({ ...input, ...levelled, shelves: exchanged.map((one) => ({ ...one, reason: null })) });
		await expect(unsaid).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'no-reason' } });
	});

	it('leave out of a free fit what is not used whole', async () => {
		const { surveyor, input } = await tied(sighted({ T3: [28, 24, 0.595] }), { levelling: 'free' });
		const free = await surveyor.api.fit.make({
			...input,
			kind: 'free',
			knownScale: null,
			shelves: [shelving({ name: 'T3', use: 'plan' })],
		});
		expect(free.result.pairs.map(({ name }) => name)).not.toContain('T3');
		expect(free.result.rms).toBeLessThan(1e-6);
	});

	it('take unnamed targets for the marks they were found to be, with a reason, in the hash and in the history', async () => {
		const unnamed = csv(
			'name,x,y,z,sigma_x,sigma_y,sigma_z,code',
			Object.fromEntries(Object.values(places).map((place, i) => [`${101 + i}`, place])),
			',0.001,0.001,0.001,TGT',
		);
		const { surveyor, input } = await tied(unnamed);
		const bare = await surveyor.api.fit.pairs(input);
		expect(bare.pairs).toEqual([]);
		expect(bare.loose?.targets.map(({ name }) => name)).toEqual(['101', '102', '103', '104', '105', '106']);
		expect(bare.loose?.control.map(({ name }) => name)).toEqual(Object.keys(places));
		expect(bare.targets).toEqual(['101', '102', '103', '104', '105', '106']);
		const relabellings = Object.keys(places).map((mark, i) => ({ target: `${101 + i}`, mark, reason: 'By mutual distances.' }));
		const found = await surveyor.api.fit.pairs({ ...input, relabellings });
		expect(found.pairs.map(({ name }) => name)).toEqual(Object.keys(places));
		expect(found.loose).toEqual({ targets: [], control: [] });
		expect(found.targets).toEqual(bare.targets);
		const made = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [], relabellings });
		expect(made.result.rms).toBeLessThan(1e-6);
		expect(made.relabellings).toEqual(relabellings);
		expect(made.pairs).not.toHaveProperty('targets');
		const fewer = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [], relabellings: relabellings.slice(0, 5) });
		expect(fewer.inputsSha256).not.toBe(made.inputsSha256);
		expect(fewer.changes).toEqual(['T6 no longer paired.', 'Target 106 no longer taken for T6.']);
		for (const [wrong, code] of [
			[{ target: '999', mark: 'T1', reason: 'x' }, 'no-such-target'],
			[{ target: '101', mark: 'T9', reason: 'x' }, 'no-such-mark'],
			[{ target: '102', mark: 'T1', reason: 'x' }, 'mark-twice'],
			[{ target: '101', mark: 'T2', reason: 'x' }, 'target-twice'],
		] as const) {
			const call = surveyor.api.fit.pairs({ ...input, relabellings: [relabellings[0]!, wrong] });
			await expect(call, code).rejects.toMatchObject({ code: 'REFUSED', data: { code } });
		}
	});
});

describe('the second person', () => {
	it('checks an adopted fit, once, and is not who adopted it', async () => {
		const { siteId, surveyor, secondSurveyor, engineer, input } = await tied(sighted());
		const { fitId } = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [] });
		const check = (person: typeof surveyor) => person.api.fit.confirm({ siteId, fitId, note: 'Residuals and held-back mark seen.' });
		await expect(check(secondSurveyor)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'not-adopted' } });
		const inCharge = { name: 'A. Surveyor', licence: 'L 17', jurisdiction: 'Invented' };
		const adopted = await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Agrees.', surveyorInCharge: inCharge });
		expect(adopted).toMatchObject({ checkedBy: null, isSecondAsked: true, surveyorInCharge: inCharge });
		await expect(check(surveyor)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'own-fit' } });
		await expect(check(engineer)).rejects.toMatchObject({ code: 'FORBIDDEN' });
		const both = await Promise.allSettled([check(secondSurveyor), check(secondSurveyor)]);
		expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		expect(both.find((one) => one.status === 'rejected')?.reason).toMatchObject({ code: 'CONFLICT' });
		// What the first person said of the surveyor in charge stays where the second says nothing.
		expect(await surveyor.api.fit.get({ siteId, fitId })).toMatchObject({
			checkedBy: secondSurveyor.name,
			checkedNote: 'Residuals and held-back mark seen.',
			surveyorInCharge: inCharge,
		});
		const next = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [] });
		await secondSurveyor.api.fit.adopt({ siteId, fitId: next.fitId, reason: 'Again.' });
		await expect(check(surveyor)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'superseded' } });
		const entries = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.siteId, siteId));
		expect(entries.filter(({ kind }) => kind === 'fit-checked')).toHaveLength(1);
	});

	it('is refused for the adopter by the database as well, and is said to be switched off where it is', async () => {
		const { siteId, surveyor, input } = await tied(sighted());
		const { fitId } = await surveyor.api.fit.make({ ...input, ...levelled, shelves: [] });
		await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Agrees.' });
		await expect(
			server.platform.db.update(fits).set({ checkedBy: surveyor.userId, checkedAt: new Date() }).where(eq(fits.id, fitId)),
		).rejects.toThrow();
		await server.platform.db.update(sites).set({ isFitCheckedBySecond: false }).where(eq(sites.id, siteId));
		expect(await surveyor.api.fit.get({ siteId, fitId })).toMatchObject({ isSecondAsked: false, checkedBy: null });
	});
});

describe('the report', () => {
	it('is a PDF of the fit, for whoever may see it, and of no other site', async () => {
		const { siteId, surveyor, observer, input } = await tied(sighted());
		const { fitId, number } = await surveyor.api.fit.make({
			...input,
			...levelled,
			shelves: [shelving({ name: 'T2', shelf: 'held-back' })],
		});
		const file = await observer.api.fit.report({ siteId, fitId });
		expect(file).toMatchObject({ type: 'application/pdf', name: `fit-${number}.pdf` });
		expect(new TextDecoder('latin1').decode((await file.arrayBuffer()).slice(0, 8))).toBe('%PDF-1.7');
		const elsewhere = await aSite(server);
		const call = elsewhere.surveyor.api.fit.report({ siteId: elsewhere.siteId, fitId });
		await expect(call).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});
});
