import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { CheckDetail } from '#shared/check/contract.ts';
import { sites } from '../../server/db/schema/site.ts';
import { demoPassword } from '../../server/scripts/demo/people.ts';
import { seedDemo } from '../../server/scripts/seed.ts';
import { type Api, cookieOf, openTestServer, type TestServer } from './harness.ts';

const demo = (name: string) => readFileSync(new URL(`../../fixtures/demo/${name}`, import.meta.url), 'utf8');
interface Shot {
	checkpointId: string;
	deviationMm?: number;
	offsetMm?: [number, number];
}
const truth = JSON.parse(demo('truth.json')) as { 'survey-1': { shots: Shot[] } };

let server: TestServer;
let said: string | null;
let tookMs: number;
let siteId: string;
let check: CheckDetail;
const cookies = new Map<string, string>();

async function signedIn(email: string): Promise<Api & { cookie: string }> {
	const answer = await server.fetch('/rpc/account/signIn', {
		method: 'POST',
		headers: { 'content-type': 'application/json' },
		body: JSON.stringify({ json: { email, password: demoPassword } }),
	});
	expect(answer.status).toBe(200);
	const cookie = cookieOf(answer.headers.get('set-cookie') ?? '');
	cookies.set(email, cookie);
	return Object.assign(server.api(cookie), { cookie });
}

beforeAll(async () => {
	server = await openTestServer();
	const from = performance.now();
	said = await seedDemo(server.platform);
	tookMs = performance.now() - from;
	const [site] = await server.platform.db.select().from(sites);
	siteId = site!.id;
	const api = await signedIn('site@marrowby.example');
	const heads = await api.check.list({ siteId });
	const asCast = heads.find(({ stage, state }) => stage === 'as-cast' && state === 'published');
	check = await api.check.get({ siteId, checkId: asCast!.checkId });
}, 240_000);
afterAll(() => server.close());

describe('the demo site', { timeout: 180_000 }, () => {
	it('says that it is invented and how to sign in, is made once, and touches nothing where a site is', async () => {
		console.info(`The demo was made in ${(tookMs / 1000).toFixed(1)} s.`);
		expect(said).toContain('invented');
		expect(said).toContain(demoPassword);
		expect(await seedDemo(server.platform)).toBeNull();
		expect(await server.platform.db.select().from(sites)).toMatchObject([{ name: 'Marrowby pump house', isInvented: true }]);
	});

	it('has one person for each role, who sees what the role may see', async () => {
		for (const role of ['project', 'contractor', 'owner', 'observer']) {
			const api = await signedIn(`${role}@marrowby.example`);
			const [site] = await api.site.list();
			expect(site).toMatchObject({ siteId, isInvented: true });
			const pours = await api.pour.list({ siteId });
			const seen = await api.check.get({ siteId, checkId: check.checkId });
			if (role === 'contractor') {
				expect(pours.length).toBeGreaterThan(0);
				expect(seen.deviations.length).toBeGreaterThan(0);
				expect(seen.deviations.length).toBeLessThan(check.deviations.length);
			} else {
				expect(pours).toHaveLength(8);
				expect(seen.deviations).toEqual(check.deviations);
			}
		}
	});

	it('has flags in every state, pours in five, and signed records', async () => {
		const api = await signedIn('project@marrowby.example');
		const states = new Set((await api.flag.list({ siteId })).map(({ state }) => state));
		expect([...states].sort()).toEqual(['answered', 'closed', 'decided', 'lapsed', 'open', 'put-right']);
		const pours = await api.pour.list({ siteId });
		const stands = new Set(pours.map(({ state, before, after }) => `${state} ${before} ${after}`));
		for (const one of [
			'cast released open',
			'cast released called',
			'cast released-with-conditions open',
			'planned released open',
			'planned submitted open',
			'planned open open',
		])
			expect([...stands]).toContain(one);
		expect((await api.record.list({ siteId })).records).toHaveLength(5);
	});

	it('measures what is true of each shot, within its uncertainty', () => {
		const byId = new Map(check.deviations.map((deviation) => [deviation.checkpointId, deviation]));
		let beyond = 0;
		for (const shot of truth['survey-1'].shots) {
			const deviation = byId.get(shot.checkpointId);
			expect(deviation, shot.checkpointId).toBeDefined();
			const expandedMm = deviation!.expandedUncertaintyMm ?? 0;
			const errorMm =
				shot.offsetMm === undefined
					? Math.abs((deviation!.deviationMm ?? Number.NaN) - shot.deviationMm!)
					: Math.hypot(...shot.offsetMm.map((value, axis) => (deviation!.offsetMm?.[axis] ?? Number.NaN) - value));
			if (!(errorMm <= expandedMm)) beyond++;
			expect(errorMm, `${shot.checkpointId} ${deviation!.label}`).toBeLessThan(2.5 * expandedMm);
		}
		// k = 2 covers 95.45 % along a line and 86 % of a round plan error.
		expect(beyond / truth['survey-1'].shots.length).toBeLessThan(0.08);
		expect(beyond).toBeGreaterThan(0);
	});

	it('finds the planted faults and accuses nothing else', () => {
		const element = new Map(check.elements.map((one) => [one.elementId, one]));
		const shot = new Map(truth['survey-1'].shots.map((one) => [one.checkpointId, one]));
		const off = check.deviations.filter(({ verdict }) => verdict === 'outside');
		const titles = [...new Set(off.map(({ elementId }) => element.get(elementId)!.title))];
		for (const { checkpointId, limitsMm, label } of off) {
			const { deviationMm, offsetMm } = shot.get(checkpointId)!;
			const trueMm = deviationMm ?? Math.hypot(...offsetMm!);
			const [lower, upper] = limitsMm!;
			expect(trueMm > (upper ?? Infinity) || trueMm < (lower ?? -Infinity), `${label}: true ${trueMm}`).toBe(true);
		}
		const has = (part: RegExp) =>
			expect(
				titles.some((title) => part.test(title)),
				`${part} in ${titles.join(' | ')}`,
			).toBe(true);
		has(/column C\/3/i);
		has(/wall/i);
		has(/slab/i);
		has(/(bolt|anchor).*C\/3/i);
		expect(check.deviations.filter(({ verdict }) => verdict === 'not-measured').length).toBe(
			check.deviations.length - truth['survey-1'].shots.length,
		);
		expect(titles.length).toBeLessThan(10);
	});

	it('names the swapped labels of the second survey', async () => {
		const api = server.api(cookies.get('site@marrowby.example'));
		const [survey] = await api.survey.list({ siteId });
		const { surveyId } = survey!;
		const { setups } = await api.survey.get({ siteId, surveyId });
		const [control] = await api.control.list({ siteId });
		const { result } = await api.fit.make({
			siteId,
			setupId: setups[0]!.setupId,
			controlSetId: control!.controlSetId,
			kind: 'levelled',
			knownScale: null,
			shelves: [],
		});
		const swapped = result.findings.find(({ code }) => code === 'swapped-labels');
		expect([...(swapped?.pairs ?? [])].sort(), JSON.stringify(result.findings)).toEqual(['C2', 'C3']);
	});
});
