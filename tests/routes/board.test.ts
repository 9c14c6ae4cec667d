import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { holdPoints, pours } from '../../server/db/schema/pour.ts';
import { openTestServer, type TestServer } from './harness.ts';
import { refusalCode } from './refusal-code.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

/** A site with one pour of a company, submitted for its release. */
async function withSubmittedPour() {
	const { db, now } = server.platform;
	const siteId = await server.addSite();
	const companyId = await server.addCompany(siteId, 'Fennick Forms');
	const pourId = randomUUID();
	const plannedAt = new Date(now().getTime() + 86_400_000);
	await db.insert(pours).values({ id: pourId, siteId, number: '7', name: 'ground columns', companyId, plannedAt, state: 'planned' });
	for (const kind of ['before-pour', 'after-pour'] as const)
		await db.insert(holdPoints).values({
			id: randomUUID(),
			siteId,
			pourId,
			kind,
			state: kind === 'before-pour' ? 'submitted' : 'open',
			list: [],
			submittedAt: kind === 'before-pour' ? now() : null,
		});
	return { siteId, companyId, pourId };
}

describe('the board of a site', () => {
	it('tells each role what is theirs, and another company nothing of it', async () => {
		const { siteId, companyId, pourId } = await withSubmittedPour();
		const other = await server.addCompany(siteId, 'Oster Steel');
		const owner = await server.addMember(siteId, ['owners-representative']);
		const own = await server.addMember(siteId, ['contractor'], companyId);
		const foreign = await server.addMember(siteId, ['contractor'], other);
		const { next } = await owner.api.site.board({ siteId });
		expect(next).toMatchObject([{ verb: 'Release pour 7', path: `pours/${pourId}`, isBefore: true }]);
		const waiting = [{ who: 'owners representative', what: 'release pour 7', since: expect.any(Date) as Date }];
		expect((await own.api.site.board({ siteId })).waiting).toMatchObject([{ ...waiting[0], who: owner.name }]);
		expect(await foreign.api.site.board({ siteId })).toEqual({ next: [], waiting: [] });
	});

	it('holds nothing of another site, and is nobody’s who is not on it', async () => {
		const { siteId } = await withSubmittedPour();
		const elsewhere = await server.addSite('Elsewhere');
		const owner = await server.addMember(elsewhere, ['owners-representative']);
		expect(await owner.api.site.board({ siteId: elsewhere })).toEqual({ next: [], waiting: [] });
		expect(await refusalCode(owner.api.site.board({ siteId }))).toBe('NOT_FOUND');
	});
});
