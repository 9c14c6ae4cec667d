import { randomUUID } from 'node:crypto';
import { safe } from '@orpc/client';
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { users } from '../../server/db/schema/account.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { invitations } from '../../server/db/schema/site.ts';
import { cookieOf, type TestServer } from './harness.ts';
import { type Actor, newEmail, openPeopleSite } from './people-site.ts';
import { refusalCode as codeOf } from './refusal-code.ts';

const password = 'north river 31 crane barrow';

let server: TestServer;
let siteId: string;
let otherSiteId: string;
let fennick: string;
let on: Record<string, Actor>;
let tokenFor: Awaited<ReturnType<typeof openPeopleSite>>['tokenFor'];
let asked: Awaited<ReturnType<typeof openPeopleSite>>['asked'];
beforeAll(async () => {
	({ server, siteId, otherSiteId, fennick, on, tokenFor, asked } = await openPeopleSite());
});
afterAll(() => server.close());

describe('an invitation', () => {
	it('names inviter, site, role, company and what waits, and makes a new person a member, signed in', async () => {
		const email = newEmail();
		await on.lead!.api.site.invite(asked('contractor', email.toUpperCase(), fennick));
		const token = await tokenFor(email);
		const mail = (await server.api().mail.mailbox()).find(({ to }) => to === email)!;
		for (const words of [on.lead!.name, 'Quay 7', 'contractor', 'Fennick Forms', 'Nothing is on the site yet', 'for one use']) {
			expect(mail.text).toContain(words);
		}
		const [row] = await server.platform.db.select().from(invitations).where(eq(invitations.email, email));
		expect(JSON.stringify(row)).not.toContain(token);
		expect(await server.api().site.openInvitation({ token })).toMatchObject({
			siteName: 'Quay 7',
			email,
			isKnown: false,
			roles: ['contractor'],
		});

		const accept = (json: object) =>
			server.fetch('/rpc/site/acceptInvitation', {
				method: 'POST',
				headers: { 'content-type': 'application/json' },
				body: JSON.stringify({ json }),
			});
		const newPerson = { name: 'Nora New', password };
		// Fields nobody asked for are refused, and the link stays whole.
		for (const more of [
			{ newPerson: { ...newPerson, role: 'project-engineer' } },
			{ newPerson, roles: ['observer'] },
			{ newPerson, siteId: otherSiteId },
		])
			expect((await accept({ token, ...more })).status).toBe(400);
		const answer = await accept({ token, newPerson });
		expect(answer.status).toBe(200);
		const mine = server.api(cookieOf(answer.headers.get('set-cookie') ?? ''));
		expect(await mine.account.me()).toMatchObject({ name: 'Nora New', email });
		expect(await mine.site.list()).toMatchObject([{ siteId, roles: ['contractor'] }]);
		expect(await server.api().account.signIn({ email, password })).toMatchObject({ name: 'Nora New' });
		const kinds = await server.platform.db
			.select({ kind: auditEntries.kind })
			.from(auditEntries)
			.where(and(eq(auditEntries.siteId, siteId), eq(auditEntries.subjectId, row!.id)));
		expect(kinds.map(({ kind }) => kind).sort()).toEqual(['invitation-accepted', 'member-invited']);
		// Used up.
		expect(await codeOf(server.api().site.openInvitation({ token }))).toBe('NOT_FOUND');
		expect(await codeOf(mine.site.acceptInvitation({ token, newPerson: null }))).toBe('NOT_FOUND');
	});

	it('is accepted once where two open it at the same moment', async () => {
		const email = newEmail();
		await on.project!.api.site.invite(asked('observer', email));
		const token = await tokenFor(email);
		const accept = (name: string) => codeOf(server.api().site.acceptInvitation({ token, newPerson: { name, password } }));
		const outcomes = await Promise.all([accept('First'), accept('Second'), accept('Third')]);
		expect(outcomes.filter((outcome) => outcome === 'done')).toHaveLength(1);
		expect(await server.platform.db.select().from(users).where(eq(users.email, email))).toHaveLength(1);
	});

	it('holds for a known person only as that person', async () => {
		const known = await server.addPerson('Known Kim', password);
		await on.project!.api.site.invite(asked('both-engineers', known.email));
		const token = await tokenFor(known.email);
		expect(await server.api().site.openInvitation({ token })).toMatchObject({ isKnown: true });
		const newPerson = { name: 'Mallory', password };
		expect(await codeOf(server.api().site.acceptInvitation({ token, newPerson }))).toBe('sign-in-first');
		expect(await codeOf(on.stranger!.api.site.acceptInvitation({ token, newPerson: null }))).toBe('other-person');
		const mine = server.api(known.cookie);
		expect(await mine.site.acceptInvitation({ token, newPerson: null })).toEqual({ siteId });
		expect(await mine.site.list()).toMatchObject([{ siteId, roles: ['site-engineer', 'project-engineer'] }]);
	});

	it.each([
		['over', { expiresAt: new Date(Date.now() - 1000) }],
		['withdrawn', { endedAt: new Date() }],
	])('does not open when it is %s', async (_, change) => {
		const email = newEmail();
		const { invitationId } = await on.project!.api.site.invite(asked('observer', email));
		const token = await tokenFor(email);
		await server.platform.db.update(invitations).set(change).where(eq(invitations.id, invitationId));
		const nobody = server.api().site;
		expect(await codeOf(nobody.openInvitation({ token }))).toBe('NOT_FOUND');
		expect(await codeOf(nobody.declineInvitation({ token }))).toBe('NOT_FOUND');
		expect(await codeOf(nobody.acceptInvitation({ token, newPerson: { name: 'Late', password } }))).toBe('NOT_FOUND');
	});

	it('is told apart neither altered nor made up', async () => {
		const email = newEmail();
		await on.project!.api.site.invite(asked('observer', email));
		const token = await tokenFor(email);
		const altered = (token.startsWith('A') ? 'B' : 'A') + token.slice(1);
		const answers = await Promise.all(
			[altered, 'x'.repeat(43)].map(async (wrong) =>
				JSON.stringify((await safe(server.api().site.openInvitation({ token: wrong }))).error),
			),
		);
		expect(new Set(answers).size).toBe(1);
		expect(await codeOf(server.api().site.openInvitation({ token: `${token}x` }))).toBe('BAD_REQUEST');
	});

	it('sent again has another link, and the old one no longer holds; "not me" ends it', async () => {
		const email = newEmail();
		const { invitationId } = await on.project!.api.site.invite(asked('observer', email));
		const old = await tokenFor(email);
		expect(await codeOf(on.project!.api.site.invite(asked('observer', email)))).toBe('already-invited');
		await on.project!.api.site.sendAgain({ siteId, invitationId });
		const token = await tokenFor(email, old);
		expect(await codeOf(server.api().site.openInvitation({ token: old }))).toBe('NOT_FOUND');
		await server.api().site.declineInvitation({ token });
		expect(await codeOf(server.api().site.openInvitation({ token }))).toBe('NOT_FOUND');
		const { invitations: listed } = await on.project!.api.site.people({ siteId });
		expect(listed.find((one) => one.invitationId === invitationId)?.state).toBe('declined');
		const entries = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.subjectId, invitationId));
		expect(entries.find(({ kind }) => kind === 'invitation-declined')).toMatchObject({ userId: null, siteId, address: expect.any(String) });
	});

	it('of another site is not there for sending again or withdrawing', async () => {
		const { invitationId } = await on.project!.api.site.invite(asked('observer'));
		for (const id of [invitationId, randomUUID()]) {
			expect(await codeOf(on.stranger!.api.site.sendAgain({ siteId: otherSiteId, invitationId: id }))).toBe('NOT_FOUND');
			expect(await codeOf(on.stranger!.api.site.withdrawInvitation({ siteId: otherSiteId, invitationId: id }))).toBe('NOT_FOUND');
		}
		// Nor one that the member could not have written.
		expect(await codeOf(on.lead!.api.site.withdrawInvitation({ siteId, invitationId }))).toBe('NOT_FOUND');
	});

	it('takes no password that is short, common or made of one’s own name', async () => {
		const email = 'marjolein.vandenberg@example.com';
		await on.project!.api.site.invite(asked('observer', email));
		const token = await tokenFor(email);
		const accept = (tried: string) =>
			codeOf(server.api().site.acceptInvitation({ token, newPerson: { name: 'Marjolein Vandenberg', password: tried } }));
		expect(await accept('short words')).toBe('BAD_REQUEST');
		for (const tried of ['Password1234!', 'qwertyuiop123', 'aaaaaaaaaaaaaaa', 'Marjolein2026!', 'P@ssw0rd2026!!', 'plumb-and-level']) {
			expect([tried, await accept(tried)]).toEqual([tried, 'common-password']);
		}
		expect(await accept(password)).toBe('done');
	});
});
