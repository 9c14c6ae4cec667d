import { safe } from '@orpc/client';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { auditEntries } from '../../server/db/schema/record.ts';
import { memberships, sites } from '../../server/db/schema/site.ts';
import { sheets } from '../../server/db/schema/tolerance.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

describe('founding a site', () => {
	it('makes the founder site and project engineer of a site with a sheet issued', async () => {
		const founder = await server.addPerson('Jana Jung');
		const api = server.api(founder.cookie);
		const made = await api.site.found({ name: 'Depot Nord', timeZone: 'Europe/Zurich' });
		expect(made).toMatchObject({ name: 'Depot Nord', isInvented: false, roles: ['site-engineer', 'project-engineer'] });
		expect(await api.site.list()).toEqual([made]);
		const { siteId } = made;
		const site = await api.site.get({ siteId });
		expect(site).toMatchObject({
			timeZone: 'Europe/Zurich',
			columnOrder: null,
			buildings: [{ name: 'Building 1' }],
			companies: [{ name: 'Contractor 1' }],
		});
		expect(site.line).toMatchObject({ newestCheckId: null, isTaut: true });
		expect(site.line.knots.map(({ knot, state }) => `${knot} ${state}`)).toEqual([
			'model open',
			'control open',
			'surveys open',
			'check open',
			'flags open',
			'pours open',
			'records open',
		]);
		const [sheet] = await api.tolerance.list({ siteId });
		expect(sheet).toMatchObject({ state: 'issued', revision: 1, issuedBy: 'Jana Jung' });
		const entries = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.siteId, siteId));
		expect(entries.map(({ kind }) => kind).sort()).toEqual(['sheet-issued', 'site-founded']);
		expect(entries[0]).toMatchObject({ userId: founder.userId, roles: ['site-engineer', 'project-engineer'] });
	});

	it('refuses a time zone that there is not, and stores nothing', async () => {
		const api = server.api((await server.addPerson('Kim Kern')).cookie);
		const before = await server.platform.db.$count(sites);
		const { error } = await safe(api.site.found({ name: 'Nowhere', timeZone: 'Europe/Atlantis' }));
		expect(error).toMatchObject({ code: 'REFUSED', data: { code: 'bad-time-zone', where: 'timeZone' } });
		expect(await server.platform.db.$count(sites)).toBe(before);
	});

	it('refuses what the form does not ask for, and stores nothing of it', async () => {
		const founder = await server.addPerson('Lea Lang');
		const api = server.api(founder.cookie);
		const form = { name: 'Plain', timeZone: 'UTC' };
		const smuggled = [
			{ isInvented: true },
			{ siteId: crypto.randomUUID() },
			{ roles: ['owners-representative'] },
			{ createdAt: '2001-01-01' },
		];
		await Promise.all(smuggled.map((more) => expect(api.site.found({ ...form, ...more })).rejects.toMatchObject({ code: 'BAD_REQUEST' })));
		const made = await api.site.found(form);
		expect(await server.platform.db.$count(sites, eq(sites.name, 'Plain'))).toBe(1);
		const [row] = await server.platform.db.select().from(sites).where(eq(sites.id, made.siteId));
		expect(row).toMatchObject({ isInvented: false, isFitCheckedBySecond: true });
		const held = await server.platform.db.select().from(memberships).where(eq(memberships.siteId, made.siteId));
		expect(held.map(({ role }) => role).sort()).toEqual(['project-engineer', 'site-engineer']);
	});

	it('refuses names that hide or say nothing', async () => {
		const api = server.api((await server.addPerson('Mia Moss')).cookie);
		for (const name of ['', '   ', 'a\u0000b', 'abc\u202etxt', 'x'.repeat(81)]) {
			await expect(api.site.found({ name, timeZone: 'UTC' })).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		}
	});
});

describe('the list of sites', () => {
	it('has the sites one is on today, by name, with the roles held there', async () => {
		const member = await server.addMember(await server.addSite('Zeta'), ['observer']);
		const [alpha, gone] = [await server.addSite('Alpha'), await server.addSite('Gone')];
		const now = new Date();
		const row = (siteId: string, role: 'site-engineer' | 'project-engineer', leftAt: Date | null) => ({
			id: crypto.randomUUID(),
			siteId,
			userId: member.userId,
			role,
			fromAt: now,
			leftAt,
		});
		await server.platform.db
			.insert(memberships)
			.values([row(alpha, 'project-engineer', null), row(alpha, 'site-engineer', null), row(gone, 'site-engineer', now)]);
		expect((await member.api.site.list()).map(({ name, roles }) => `${name}: ${roles}`)).toEqual([
			'Alpha: site-engineer,project-engineer',
			'Zeta: observer',
		]);
	});
});

describe('the database itself', () => {
	it('refuses to change or delete an audit entry, and a second issued sheet', async () => {
		const founder = await server.addPerson('Nora Nash');
		const { siteId } = await server.api(founder.cookie).site.found({ name: 'Locked', timeZone: 'UTC' });
		const { db } = server.platform;
		await expect(db.update(auditEntries).set({ kind: 'signed-in' }).where(eq(auditEntries.siteId, siteId))).rejects.toThrow();
		await expect(db.delete(auditEntries).where(eq(auditEntries.siteId, siteId))).rejects.toThrow();
		const [issued] = await db.select().from(sheets).where(eq(sheets.siteId, siteId));
		await expect(db.insert(sheets).values({ ...issued!, id: crypto.randomUUID(), revision: 2 })).rejects.toMatchObject({
			cause: { code: '23505', constraint: 'sheets_one_issued' },
		});
	});
});
