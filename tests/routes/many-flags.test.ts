import { afterAll, beforeAll, expect, it } from 'vitest';
import { aSite } from '../builders/a-site.ts';
import { raiseFlags } from '../builders/raised-flags.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

it('10 000 flags are listed whole, by deadline, each company its own, and a thousand are answered at once', async () => {
	const site = await aSite(server);
	const { siteId, engineer, contractor, otherCompanyId } = site;
	const other = await server.addMember(siteId, ['contractor'], otherCompanyId);
	const soonest = Date.now() + 3_600_000;
	await raiseFlags(server, site, 10_000, (index) => ({
		answerBy: new Date(soonest + ((index * 7919) % 10_000) * 60_000),
		...(index % 10 === 0 && { companyId: otherCompanyId }),
	}));
	const from = performance.now();
	const all = await engineer.api.flag.list({ siteId });
	console.info(`10 000 flags listed in ${Math.round(performance.now() - from)} ms`);
	expect(all).toHaveLength(10_000);
	const deadlines = all.map(({ answerBy }) => answerBy!.getTime());
	expect(deadlines).toEqual(deadlines.toSorted((a, b) => a - b));
	expect(await other.api.flag.list({ siteId })).toHaveLength(1000);
	const own = (await contractor.api.flag.list({ siteId })).slice(0, 1000);
	const flags = own.map(({ flagId, version }) => ({ flagId, version }));
	const before = performance.now();
	const { changed } = await contractor.api.flag.answer({ siteId, flags, answer: { kind: 'concession', why: 'No harm.' } });
	console.info(`1000 flags answered in ${Math.round(performance.now() - before)} ms`);
	expect(changed).toBe(1000);
}, 120_000);
