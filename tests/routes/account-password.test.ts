import { setTimeout as wait } from 'node:timers/promises';
import { safe } from '@orpc/client';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { passwordResets, sessions } from '../../server/db/schema/account.ts';
import { mails } from '../../server/db/schema/mail.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { openTestServer, type TestServer } from './harness.ts';

const first = 'north river 31 crane barrow';
const second = 'quiet lantern under 7 gables';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer({ proxyHops: 1 });
});
afterAll(() => server.close());

const codeOf = async (call: Promise<unknown>) => {
	const { error } = await safe(call);
	if (error === null) return 'done';
	const refused = error as { code?: string; data?: { code?: string } };
	return refused.data?.code ?? refused.code ?? String(error);
};
const mailTo = async (email: string, isRight: (text: string) => boolean) => {
	for (let n = 0; n < 150; n += 1) {
		const mail = (await server.api().mail.mailbox()).find(({ to, text }) => to === email && isRight(text));
		if (mail !== undefined) return mail;
		await wait(100);
	}
	throw new Error(`No such mail came to ${email}`);
};
const tokenIn = (text: string) => /\/reset#([\w-]{43})/.exec(text)?.[1] ?? '';
const resetToken = async (email: string, than = '') =>
	tokenIn((await mailTo(email, (text) => tokenIn(text) !== '' && tokenIn(text) !== than)).text);

/** The call as a browser makes it, with headers of its own. */
const ask = (email: string, headers: Record<string, string> = {}) =>
	server.fetch('/rpc/account/askReset', {
		method: 'POST',
		headers: { 'content-type': 'application/json', ...headers },
		body: JSON.stringify({ json: { email } }),
	});

describe('a new password by mail', () => {
	it('is set once by the link, ends every session, is told to the person, and leaves its trace', async () => {
		const person = await server.addPerson('Rita Reset', first);
		const elsewhere = await server.sessions.create(person.userId);
		await server.api().account.askReset({ email: person.email.toUpperCase() });
		const token = await resetToken(person.email);
		expect(JSON.stringify(await server.platform.db.select().from(passwordResets))).not.toContain(token);
		expect(await codeOf(server.api().account.resetPassword({ token, password: 'short' }))).toBe('BAD_REQUEST');
		expect(await codeOf(server.api().account.resetPassword({ token, password: 'Password1234' }))).toBe('common-password');
		const outcomes = await Promise.all([1, 2, 3].map(() => codeOf(server.api().account.resetPassword({ token, password: second }))));
		expect(outcomes.sort()).toEqual(['NOT_FOUND', 'NOT_FOUND', 'done']);
		for (const cookie of [person.cookie, elsewhere.split(';')[0]]) expect(await server.api(cookie).account.me()).toBeNull();
		expect(await codeOf(server.api().account.signIn({ email: person.email, password: first }))).toBe('WRONG');
		expect(await codeOf(server.api().account.signIn({ email: person.email, password: second }))).toBe('done');
		await mailTo(person.email, (text) => text.includes('Your password was changed'));
		const entries = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.subjectId, person.userId));
		expect(entries.map(({ kind }) => kind)).toEqual(expect.arrayContaining(['reset-asked', 'password-reset', 'signed-in']));
		expect(entries.every(({ address }) => address !== null)).toBe(true);
	});

	it('holds for half an hour, and only the newest link', async () => {
		const person = await server.addPerson('Otto Over', first);
		await server.api().account.askReset({ email: person.email });
		const old = await resetToken(person.email);
		await server.api().account.askReset({ email: person.email });
		const newest = await resetToken(person.email, old);
		expect(await codeOf(server.api().account.resetPassword({ token: old, password: second }))).toBe('NOT_FOUND');
		const rows = await server.platform.db.select().from(passwordResets).where(eq(passwordResets.userId, person.userId));
		for (const { createdAt, expiresAt } of rows) expect(expiresAt.getTime() - createdAt.getTime()).toBe(30 * 60_000);
		await server.platform.db.update(passwordResets).set({ expiresAt: new Date(Date.now() - 1) });
		expect(await codeOf(server.api().account.resetPassword({ token: newest, password: second }))).toBe('NOT_FOUND');
		expect(await codeOf(server.api().account.resetPassword({ token: 'x'.repeat(43), password: second }))).toBe('NOT_FOUND');
	});

	it('does not tell who has an account: the same answer, the same rows, about the same time, and no mail to strangers', async () => {
		const person = await server.addPerson('Karl Known', first);
		await ask('warm.up@example.com', { 'x-forwarded-for': '203.0.113.1' });
		const timed = async (email: string, n: number) => {
			const begun = performance.now();
			const answer = await ask(email, { 'x-forwarded-for': `203.0.113.${n}` });
			return { ms: performance.now() - begun, status: answer.status, body: await answer.text() };
		};
		const known = [await timed(person.email, 2), await timed(person.email, 3), await timed(person.email, 4)];
		const unknown = [await timed('no.1@example.com', 5), await timed('no.2@example.com', 6), await timed('no.3@example.com', 7)];
		for (const { status, body } of [...known, ...unknown]) expect({ status, body }).toEqual({ status: 200, body: known[0]!.body });
		const least = (runs: { ms: number }[]) => Math.min(...runs.map(({ ms }) => ms));
		expect(least(unknown)).toBeGreaterThan(least(known) / 3);
		expect(least(known)).toBeGreaterThan(least(unknown) / 3);
		const sent = await server.platform.db.select({ to: mails.toAddress, state: mails.state, text: mails.text }).from(mails);
		expect(sent.filter(({ to }) => to.startsWith('no.'))).toEqual([]);
		expect(sent.filter(({ state }) => state === 'void').length).toBeGreaterThanOrEqual(3);
	});

	it('has links to this server, whatever Host or Origin the request claims, and stops one address that asks on and on', async () => {
		const person = await server.addPerson('Hugo Host', first);
		const forged = await ask(person.email, { 'x-forwarded-host': 'evil.example', 'x-forwarded-for': '198.51.100.1' });
		expect([200, 403]).toContain(forged.status);
		expect((await ask(person.email, { origin: 'https://evil.example' })).status).toBe(403);
		await ask(person.email, { 'x-forwarded-for': '198.51.100.1' });
		const mail = await mailTo(person.email, (text) => tokenIn(text) !== '');
		expect(mail.text).toContain(`${server.address}/reset#`);
		expect(mail.text).not.toContain('evil.example');
		const answers: number[] = [];
		// What the client writes before the proxy's own word counts for nothing.
		for (let n = 0; n < 22; n += 1)
			answers.push((await ask(`p.${n}@example.com`, { 'x-forwarded-for': `9.9.9.${n}, 198.51.100.9` })).status);
		expect(answers.filter((status) => status === 200)).toHaveLength(20);
		expect(answers.slice(20)).toEqual([429, 429]);
	});
});

describe('a change of password', () => {
	it('asks for the old one, ends the other sessions, keeps this one', async () => {
		const person = await server.addPerson('Clara Change', first);
		const other = (await server.sessions.create(person.userId)).split(';')[0];
		const mine = server.api(person.cookie);
		expect(await codeOf(mine.account.changePassword({ current: 'wrong', password: second }))).toBe('WRONG');
		expect(await codeOf(mine.account.changePassword({ current: first, password: 'Clara Change 1' }))).toBe('common-password');
		expect(await codeOf(mine.account.changePassword({ current: first, password: second }))).toBe('done');
		expect(await mine.account.me()).not.toBeNull();
		expect(await server.api(other).account.me()).toBeNull();
		expect(await codeOf(server.api().account.signIn({ email: person.email, password: second }))).toBe('done');
		for (let n = 0; n < 8; n += 1) await codeOf(mine.account.changePassword({ current: 'wrong', password: first }));
		expect(await codeOf(mine.account.changePassword({ current: second, password: first }))).toBe('TOO_MANY');
	});
});

describe('sessions', () => {
	it('are listed with where they began, and ended one by one or all but this one; never somebody else’s', async () => {
		const person = await server.addPerson('Sina Session', first);
		const stranger = await server.addPerson('Other Person');
		await server.api().account.signIn({ email: person.email, password: first });
		const begun = await server.sessions.create(person.userId, { userAgent: 'Mozilla/5.0 Firefox/140.0', address: '203.0.113.9' });
		const mine = server.api(person.cookie);
		const listed = await mine.account.sessions();
		expect(listed).toHaveLength(3);
		expect(listed.filter(({ isThis }) => isThis)).toHaveLength(1);
		const strange = listed.find(({ address }) => address === '203.0.113.9')!;
		expect(strange).toMatchObject({ userAgent: 'Mozilla/5.0 Firefox/140.0', createdAt: expect.any(Date) });
		expect(await codeOf(server.api(stranger.cookie).account.endSessions({ sessionId: strange.sessionId }))).toBe('NOT_FOUND');
		expect(await mine.account.endSessions({ sessionId: strange.sessionId })).toEqual({ ended: 1 });
		expect(await server.api(begun.split(';')[0]).account.me()).toBeNull();
		expect(await mine.account.endSessions({ sessionId: null })).toEqual({ ended: 1 });
		expect(await mine.account.me()).not.toBeNull();
		expect(await server.platform.db.select().from(sessions).where(eq(sessions.userId, stranger.userId))).toHaveLength(1);
	});
});
