import { createHash } from 'node:crypto';
import { safe } from '@orpc/client';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { sessions } from '../../server/db/schema/account.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { cookieOf, openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	// One proxy before it, so that tests can come from many network addresses.
	server = await openTestServer({ proxyHops: 1 });
});
afterAll(() => server.close());

/** The call as a browser makes it, for what only the answer's head tells. */
const signInCall = (email: string, password: string, headers: Record<string, string> = {}) =>
	server.fetch('/rpc/account/signIn', {
		method: 'POST',
		headers: { 'content-type': 'application/json', ...headers },
		body: JSON.stringify({ json: { email, password } }),
	});

describe('signing in', () => {
	it('gives a cookie that is the person from then on, until signed out', async () => {
		const { email, userId, name } = await server.addPerson('Ada Adams', 'correct horse');
		const answer = await signInCall(email.toUpperCase(), 'correct horse');
		expect(answer.status).toBe(200);
		const setCookie = answer.headers.get('set-cookie') ?? '';
		expect(setCookie).toMatch(/; HttpOnly; Max-Age=2592000; Path=\/; SameSite=Lax$/);
		const cookie = cookieOf(setCookie);
		expect(await server.api(cookie).account.me()).toEqual({ userId, name, email });

		const out = await server.fetch('/rpc/account/signOut', {
			method: 'POST',
			headers: { 'content-type': 'application/json' },
			body: '{}',
			cookie,
		});
		expect(out.status).toBe(200);
		expect(out.headers.get('set-cookie')).toMatch(/^bb-session=;.*Max-Age=0/);
		expect(await server.api(cookie).account.me()).toBeNull();
		const kinds = await server.platform.db.select({ kind: auditEntries.kind }).from(auditEntries).where(eq(auditEntries.userId, userId));
		expect(kinds.map(({ kind }) => kind).sort()).toEqual(['signed-in', 'signed-out']);
	});

	it('keeps only the hash of what the cookie holds', async () => {
		const { userId, cookie } = await server.addPerson('Berta Bell');
		const held = decodeURIComponent(cookie.split('=')[1]!);
		const [row] = await server.platform.db.select().from(sessions).where(eq(sessions.userId, userId));
		expect(row?.id).toBe(createHash('sha256').update(held).digest('hex'));
		// Who read the table has no session by what stands there.
		expect(await server.api(`bb-session=${row?.id}`).account.me()).toBeNull();
	});

	it('ends a session at its expiry, and one that was kept alive after ninety days', async () => {
		const { userId, cookie } = await server.addPerson('Carla Cole');
		await server.platform.db
			.update(sessions)
			.set({ expiresAt: new Date(Date.now() - 1000) })
			.where(eq(sessions.userId, userId));
		expect(await server.api(cookie).account.me()).toBeNull();

		const old = await server.addPerson('Dora Dale');
		const begun = (Date.now() - 91 * 24 * 3_600_000).toString(36);
		const id = `${begun}.${'x'.repeat(43)}`;
		await server.platform.db.insert(sessions).values({
			id: createHash('sha256').update(id).digest('hex'),
			userId: old.userId,
			expiresAt: new Date(Date.now() + 20 * 24 * 3_600_000),
		});
		expect(await server.api(`bb-session=${id}`).account.me()).toBeNull();
	});

	it('prolongs a session in its second half and sends the cookie again', async () => {
		const { userId, cookie } = await server.addPerson('Ella East');
		await server.platform.db
			.update(sessions)
			.set({ expiresAt: new Date(Date.now() + 10 * 24 * 3_600_000) })
			.where(eq(sessions.userId, userId));
		const answer = await server.fetch('/rpc/account/me', {
			method: 'POST',
			headers: { 'content-type': 'application/json' },
			body: '{}',
			cookie,
		});
		expect(cookieOf(answer.headers.get('set-cookie') ?? '')).toBe(cookie);
		const [row] = await server.platform.db.select().from(sessions).where(eq(sessions.userId, userId));
		expect(row!.expiresAt.getTime()).toBeGreaterThan(Date.now() + 29 * 24 * 3_600_000);
	});

	it('answers an unknown address as it answers a wrong password, in about the same time', async () => {
		const { email } = await server.addPerson('Frida Fox', 'right');
		const timed = async (address: string) => {
			const begun = performance.now();
			const answer = await signInCall(address, 'wrong');
			return { ms: performance.now() - begun, status: answer.status, body: await answer.json() };
		};
		await timed('warm.up@example.com');
		const known = [await timed(email), await timed(email), await timed(email)];
		const unknown = [await timed('nobody.1@example.com'), await timed('nobody.2@example.com'), await timed('nobody.3@example.com')];
		for (const { status, body } of [...known, ...unknown]) {
			expect(status).toBe(401);
			expect(body).toEqual(known[0]!.body);
		}
		const least = (runs: { ms: number }[]) => Math.min(...runs.map(({ ms }) => ms));
		// Without the same hashing the unknown one would be back many times sooner.
		expect(least(unknown)).toBeGreaterThan(least(known) / 3);
	});

	it('refuses a cookie that cannot be decoded like no cookie', async () => {
		expect(await server.api('bb-session=%zz').account.me()).toBeNull();
	});
});

describe('the limit on tries', () => {
	const tryFrom = (address: string, email: string, password = 'wrong') =>
		server
			.fetch('/rpc/account/signIn', {
				method: 'POST',
				headers: { 'content-type': 'application/json', 'x-forwarded-for': address },
				body: JSON.stringify({ json: { email, password } }),
			})
			.then(({ status }) => status);

	it('holds for one account from anywhere, known or not, and lets no right password through either', async () => {
		const { email } = await server.addPerson('Greta Gray', 'right');
		for (const address of [email, 'nobody@example.com']) {
			const answers = await Promise.all(Array.from({ length: 10 }, (_, index) => tryFrom(`10.0.0.${index}`, address)));
			expect(answers.filter((status) => status === 401)).toHaveLength(8);
			expect(answers.filter((status) => status === 429)).toHaveLength(2);
		}
		expect(await tryFrom('10.0.0.99', email, 'right')).toBe(429);
	});

	it('holds for one network address over all accounts, by the last proxy’s word and not the sender’s', async () => {
		const answers: number[] = [];
		for (let n = 0; n < 22; n += 1) answers.push(await tryFrom(`203.0.113.${n}, 198.51.100.7`, `person.${n}@example.com`));
		expect(answers.filter((status) => status === 401)).toHaveLength(20);
		expect(answers.slice(20)).toEqual([429, 429]);
		expect(await tryFrom('198.51.100.8', 'person.30@example.com')).toBe(401);
	});

	it('does not count tries that were right', async () => {
		const { email } = await server.addPerson('Hilda Hart', 'right');
		for (let n = 0; n < 12; n += 1) expect(await tryFrom('198.51.100.20', email, 'right')).toBe(200);
	});
});

describe('the origin of a request', () => {
	const call = (headers: Record<string, string>) =>
		fetch(`${server.address}/rpc/account/me`, { method: 'POST', headers: { 'content-type': 'application/json', ...headers }, body: '{}' });

	it('refuses another origin, none, and "null"', async () => {
		expect((await call({ origin: server.address })).status).toBe(200);
		for (const origin of ['https://elsewhere.example', 'null', server.address.replace(/\d+$/, '1')]) {
			expect((await call({ origin })).status).toBe(403);
		}
		expect((await call({})).status).toBe(403);
	});

	it('answers no call by GET', async () => {
		const { cookie } = await server.addPerson('Ida Ives');
		const answer = await server.fetch('/rpc/account/signOut?data={}', { cookie });
		expect(answer.status).toBeGreaterThanOrEqual(400);
		expect(await server.api(cookie).account.me()).not.toBeNull();
	});
});

describe('what a call may bring', () => {
	it('says what is wrong with a field, without patterns or what was sent', async () => {
		const { error } = await safe(server.api().account.signIn({ email: 'no address', password: '' }));
		expect(error).toMatchObject({
			code: 'BAD_REQUEST',
			data: {
				issues: [
					{ path: 'email', message: 'Write an e-mail address.' },
					{ path: 'password', message: 'Write your password.' },
				],
			},
		});
		expect(JSON.stringify(error)).not.toContain('pattern');
	});

	it('refuses a body over a megabyte, also one that does not say its length', async () => {
		const big = JSON.stringify({ json: { email: 'a@example.com', password: 'x'.repeat(1_000_001) } });
		const chunks = new Blob([big]).stream();
		for (const body of [big, chunks]) {
			const answer = await server.fetch('/rpc/account/signIn', {
				method: 'POST',
				headers: { 'content-type': 'application/json' },
				body,
				...(typeof body === 'string' ? {} : { duplex: 'half' }),
			} as RequestInit);
			expect(answer.status).toBe(413);
		}
	});
});
