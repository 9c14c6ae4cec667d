import { randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Role } from '#shared/permissions.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { memberships } from '../../server/db/schema/site.ts';
import { areSeparate, type Held, mayName } from '../../server/features/site/naming.ts';
import { audit } from '../../server/platform/audit.ts';
import { memberOf } from '../../server/platform/membership.ts';
import { cookieOf, type TestServer } from './harness.ts';
import { type Actor, newEmail, openPeopleSite } from './people-site.ts';
import { refusalCode as codeOf } from './refusal-code.ts';

const password = 'north river 31 crane barrow';

let server: TestServer;
let siteId: string;
let otherSiteId: string;
let fennick: string;
let oster: string;
let on: Record<string, Actor>;
let tokenFor: Awaited<ReturnType<typeof openPeopleSite>>['tokenFor'];
let asked: Awaited<ReturnType<typeof openPeopleSite>>['asked'];
beforeAll(async () => {
	({ server, siteId, otherSiteId, fennick, oster, on, tokenFor, asked } = await openPeopleSite());
});
afterAll(() => server.close());

describe('who may name whom', () => {
	const nobody = { role: 'observer', companyId: null, isLead: false, isDeputy: false } satisfies Held;
	const project = { ...nobody, role: 'project-engineer' } satisfies Held;
	const owner = { ...nobody, role: 'owners-representative' } satisfies Held;
	const lead = { ...nobody, role: 'contractor', companyId: 'a', isLead: true } satisfies Held;

	it('follows the table', () => {
		const roles = ['site-engineer', 'project-engineer', 'contractor', 'owners-representative', 'observer'] as const;
		const named = (held: Held, hasHad = true) => roles.filter((role) => mayName([held], { role, companyId: 'a' }, hasHad));
		expect(named(project)).toEqual(['site-engineer', 'project-engineer', 'contractor', 'observer']);
		expect(named(project, false)).toEqual(roles);
		expect(named(owner)).toEqual(['owners-representative']);
		expect(named({ ...owner, isDeputy: true })).toEqual([]);
		expect(named(lead)).toEqual(['contractor']);
		expect(named({ ...lead, isLead: false })).toEqual([]);
		expect(named({ ...lead, companyId: 'b' })).toEqual([]);
		for (const held of [nobody, { ...nobody, role: 'site-engineer' } satisfies Held]) expect(named(held, false)).toEqual([]);
		expect(areSeparate(['site-engineer', 'project-engineer'])).toBe(true);
		expect(areSeparate(['owners-representative', 'observer'])).toBe(false);
	});

	it('is refused by the server for everybody else', async () => {
		for (const who of ['site', 'observer']) expect(await codeOf(on[who]!.api.site.invite(asked('observer')))).toBe('FORBIDDEN');
		expect(await codeOf(on.project!.api.site.invite(asked('owners-representative')))).toBe('FORBIDDEN');
		expect(await codeOf(on.owner!.api.site.invite(asked('site-engineer')))).toBe('FORBIDDEN');
		expect(await codeOf(on.worker!.api.site.invite(asked('contractor', newEmail(), fennick)))).toBe('FORBIDDEN');
		expect(await codeOf(on.lead!.api.site.invite(asked('contractor', newEmail(), oster)))).toBe('FORBIDDEN');
		expect(await codeOf(on.lead!.api.site.invite(asked('observer')))).toBe('FORBIDDEN');
		expect(await codeOf(on.owner!.api.site.invite(asked('owners-representative')))).toBe('done');
		// A company of another site, and a person who is not on this one.
		const foreign = await server.addCompany(otherSiteId, 'Foreign Forms');
		expect(await codeOf(on.project!.api.site.invite(asked('contractor', newEmail(), foreign)))).toBe('NOT_FOUND');
		const given = { siteId, role: 'observer' as const, companyId: null, isLead: false };
		expect(await codeOf(on.project!.api.site.giveRole({ ...given, userId: on.stranger!.userId }))).toBe('NOT_FOUND');
		expect(await codeOf(on.observer!.api.site.giveRole({ ...given, userId: on.observer!.userId, role: 'project-engineer' }))).toBe(
			'FORBIDDEN',
		);
	});

	it('keeps owner’s representatives apart from every other role, by the policy and by the database', async () => {
		expect(await codeOf(on.owner!.api.site.invite(asked('owners-representative', on.site!.email)))).toBe('both-sides');
		expect(await codeOf(on.project!.api.site.invite(asked('observer', on.owner!.email)))).toBe('both-sides');
		const given = { siteId, companyId: null, isLead: false };
		expect(await codeOf(on.owner!.api.site.giveRole({ ...given, userId: on.project!.userId, role: 'owners-representative' }))).toBe(
			'both-sides',
		);
		const row = { id: randomUUID(), siteId, companyId: null, fromAt: new Date() };
		const write = (userId: string, role: Role) => server.platform.db.insert(memberships).values({ ...row, userId, role });
		await expect(write(on.site!.userId, 'owners-representative')).rejects.toThrow();
		await expect(write(on.owner!.userId, 'observer')).rejects.toThrow();
		// Invited before, on the other side by the time of accepting.
		const between = await server.addPerson('Ben Between');
		await on.owner!.api.site.invite(asked('owners-representative', between.email));
		const token = await tokenFor(between.email);
		await write(between.userId, 'observer');
		expect(await codeOf(server.api(between.cookie).site.acceptInvitation({ token, newPerson: null }))).toBe('both-sides');
		expect(await server.api(between.cookie).site.list()).toMatchObject([{ roles: ['observer'] }]);
	});

	it('lets the owner’s contact be named at founding, and that one name the next', async () => {
		const founder = await server.addPerson('Fred Founder');
		const email = newEmail();
		const site = await server.api(founder.cookie).site.found({ name: 'New quay', timeZone: 'Europe/Zurich', ownersContact: email });
		const token = await tokenFor(email);
		const answer = await server.fetch('/rpc/site/acceptInvitation', {
			method: 'POST',
			headers: { 'content-type': 'application/json' },
			body: JSON.stringify({ json: { token, newPerson: { name: 'Olive Owner', password } } }),
		});
		const owner = server.api(cookieOf(answer.headers.get('set-cookie') ?? ''));
		const next = { ...asked('owners-representative'), siteId: site.siteId };
		expect(await codeOf(server.api(founder.cookie).site.invite(next))).toBe('FORBIDDEN');
		expect(await codeOf(owner.site.invite(next))).toBe('done');
	});
});

describe('leaving', () => {
	it('ends at once what a signed-in person sees, and leaves what was done', async () => {
		const leaver = await server.addMember(siteId, ['site-engineer']);
		const { people } = await on.project!.api.site.people({ siteId });
		const { membershipId } = people.find(({ userId }) => userId === leaver.userId)!.holdings[0]!;
		expect(await codeOf(on.observer!.api.site.endRole({ siteId, membershipId }))).toBe('FORBIDDEN');
		expect(await codeOf(on.stranger!.api.site.endRole({ siteId: otherSiteId, membershipId }))).toBe('NOT_FOUND');
		expect(await codeOf(leaver.api.site.get({ siteId }))).toBe('done');
		await on.project!.api.site.endRole({ siteId, membershipId });
		expect(await codeOf(leaver.api.site.get({ siteId }))).toBe('NOT_FOUND');
		expect(await leaver.api.site.list()).toEqual([]);
		expect(await codeOf(on.project!.api.site.endRole({ siteId, membershipId }))).toBe('NOT_FOUND');
		const [row] = await server.platform.db.select().from(memberships).where(eq(memberships.id, membershipId));
		expect(row?.leftAt).toBeInstanceOf(Date);
		// Back again: a second row, the first stays.
		await on.project!.api.site.invite(asked('site-engineer', leaver.email));
		await leaver.api.site.acceptInvitation({ token: await tokenFor(leaver.email), newPerson: null });
		expect(await server.platform.db.select().from(memberships).where(eq(memberships.userId, leaver.userId))).toHaveLength(2);
	});

	it('is anybody’s own to do, except the last who could name the next', async () => {
		const lonely = await server.addSite('Lonely');
		const project = await server.addMember(lonely, ['project-engineer']);
		const owner = await server.addMember(lonely, ['owners-representative']);
		const worker = await server.addMember(lonely, ['observer']);
		const own = async ({ api, userId }: Actor) =>
			(await api.site.people({ siteId: lonely })).people.find((one) => one.userId === userId)!.holdings[0]!.membershipId;
		for (const actor of [project, owner]) {
			expect(await codeOf(actor.api.site.endRole({ siteId: lonely, membershipId: await own(actor) }))).toBe('last-one');
		}
		expect(await codeOf(project.api.site.endRole({ siteId: lonely, membershipId: await own(owner) }))).toBe('FORBIDDEN');
		expect(await codeOf(worker.api.site.endRole({ siteId: lonely, membershipId: await own(worker) }))).toBe('done');
	});
});

describe('a deputy', () => {
	it('is named by the holder alone, from and until, and names no owner’s representative', async () => {
		const deputy = await server.addPerson('Dina Deputy');
		const hourMs = 3_600_000;
		const span = { fromAt: new Date(Date.now() - hourMs), untilAt: new Date(Date.now() + hourMs) };
		const named = { siteId, email: deputy.email, role: 'owners-representative' as const, ...span };
		for (const who of ['project', 'site', 'lead']) expect(await codeOf(on[who]!.api.site.nameDeputy(named))).toBe('FORBIDDEN');
		expect(await codeOf(on.owner!.api.site.nameDeputy({ ...named, untilAt: new Date(Date.now() - 1) }))).toBe('no-time');
		expect(await codeOf(on.owner!.api.site.nameDeputy({ ...named, email: on.site!.email }))).toBe('both-sides');
		await on.owner!.api.site.nameDeputy(named);
		const mine = server.api(deputy.cookie);
		await mine.site.acceptInvitation({ token: await tokenFor(deputy.email), newPerson: null });
		expect(await mine.site.list()).toMatchObject([{ siteId, roles: ['owners-representative'] }]);
		expect(await codeOf(mine.site.invite(asked('owners-representative')))).toBe('FORBIDDEN');
		// What is done as a deputy says in whose stead; what the holder does says nothing of the kind.
		await server.platform.transaction(async (tx) => {
			const asDeputy = await memberOf(tx, deputy, siteId, server.platform.now());
			if (asDeputy === null) throw new Error('The deputy is no member.');
			for (const actor of [asDeputy, { ...on.owner! }])
				await audit(tx, actor, { kind: 'company-added', subjectId: siteId, data: { name: actor.name } });
		});
		const entries = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.kind, 'company-added'));
		const stead = (name: string) =>
			entries.find(({ data }) => (data as { name?: string }).name === name)?.data as { asDeputyOf?: string[] };
		expect(stead('Dina Deputy').asDeputyOf).toEqual([`${on.owner!.name} (owners-representative)`]);
		expect(stead(on.owner!.name).asDeputyOf).toBeUndefined();
		// The time is over: the guard asks it at each request.
		await server.platform.db
			.update(memberships)
			.set({ leftAt: new Date(Date.now() - 1) })
			.where(eq(memberships.userId, deputy.userId));
		expect(await codeOf(mine.site.get({ siteId }))).toBe('NOT_FOUND');
	});
});

describe('the list of people', () => {
	it('shows a contractor its own and who leads the site, not the other firms’ people, and no addresses beyond its own', async () => {
		const seen = (await on.worker!.api.site.people({ siteId })).people;
		const ids = seen.map(({ userId }) => userId);
		for (const who of ['site', 'project', 'lead', 'worker', 'owner']) expect(ids).toContain(on[who]!.userId);
		expect(ids).not.toContain(on.steel!.userId);
		expect(seen.find(({ userId }) => userId === on.project!.userId)?.email).toBeNull();
		expect(seen.find(({ userId }) => userId === on.lead!.userId)?.email).toBe(on.lead!.email);
		expect((await on.worker!.api.site.people({ siteId })).invitations).toEqual([]);
		expect((await on.project!.api.site.people({ siteId })).people.map(({ userId }) => userId)).toContain(on.steel!.userId);
		expect((await on.observer!.api.site.people({ siteId })).nameableRoles).toEqual([]);
	});
});

describe('companies', () => {
	it('are added and renamed by the project engineer, each name once, those of other sites untouched', async () => {
		const { companyId } = await on.project!.api.site.addCompany({ siteId, name: 'Harrow Piling' });
		expect(await codeOf(on.project!.api.site.addCompany({ siteId, name: 'Harrow Piling' }))).toBe('name-taken');
		expect(await codeOf(on.project!.api.site.renameCompany({ siteId, companyId, name: 'Oster Steel' }))).toBe('name-taken');
		expect(await codeOf(on.stranger!.api.site.renameCompany({ siteId: otherSiteId, companyId, name: 'Taken over' }))).toBe('NOT_FOUND');
		expect(await codeOf(on.project!.api.site.renameCompany({ siteId, companyId, name: 'Harrow & Sons' }))).toBe('done');
	});
});
