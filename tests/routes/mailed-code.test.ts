import { setTimeout as wait } from 'node:timers/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { signInSteps } from '../../server/db/schema/account.ts';
import { mails } from '../../server/db/schema/mail.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { openSessions } from '../../server/platform/session.ts';
import { cookieOf, openTestServer, type TestServer } from './harness.ts';
import { refusalCode } from './refusal-code.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer({ proxyHops: 1 });
});
afterAll(() => server.close());

const call = (path: string, input: unknown, address: string) =>
	server.fetch(`/rpc/account/${path}`, {
		method: 'POST',
		headers: { 'content-type': 'application/json', 'x-forwarded-for': address },
		body: JSON.stringify({ json: input }),
	});
const askFor = async (email: string, address: string) => {
	const answer = await call('askCode', { email }, address);
	const { json } = (await answer.json()) as { json: { token: string } };
	return { status: answer.status, fields: Object.keys(json), token: json.token };
};
const codeFor = async (email: string, than = '') => {
	for (let n = 0; n < 150; n += 1) {
		const mail = (await server.api().mail.mailbox()).find(({ to }) => to === email);
		const code = /\b\d{4} ?\d{4}\b/.exec(mail?.text ?? '')?.[0];
		if (code !== undefined && code !== than) return code;
		await wait(100);
	}
	throw new Error(`No code came for ${email}`);
};

describe('a code by mail', () => {
	it('opens once, in the browser that asked, and for twelve hours at most on a device not one’s own', async () => {
		const person = await server.addPerson('Kim Code');
		const mine = await askFor(person.email, '203.0.113.1');
		const other = await askFor('stranger@example.com', '203.0.113.2');
		const code = await codeFor(person.email);
		const shown = (token: string, isOwnDevice = false) => call('signInByCode', { token, code, isOwnDevice }, '203.0.113.3');
		expect((await shown(other.token)).ok).toBe(false);
		const opened = await shown(mine.token);
		expect(opened.status).toBe(200);
		const cookie = cookieOf(opened.headers.get('set-cookie') ?? '');
		expect((await server.api(cookie).account.me())?.userId).toBe(person.userId);
		const hoursOn = (hours: number) =>
			openSessions({ db: server.platform.db, isSecure: false, now: () => new Date(Date.now() + hours * 3_600_000) }).validate(cookie);
		expect((await hoursOn(11.9)).signedIn?.userId).toBe(person.userId);
		expect((await hoursOn(12.1)).signedIn).toBeNull();
		expect((await shown(mine.token)).ok).toBe(false);
	});

	it('does not tell who has an account: one answer, the same work and rows, and no mail to strangers', async () => {
		const { db } = server.platform;
		const person = await server.addPerson('Una Known');
		const count = async () => [
			(await db.select().from(signInSteps)).length,
			(await db.select().from(mails)).length,
			(await db.select().from(auditEntries)).length,
		];
		for (let n = 0; n < 2; n += 1)
			for (const email of [person.email, `nobody.${n}@example.com`]) {
				const before = await count();
				const { status, fields } = await askFor(email, `203.0.113.${20 + n}`);
				expect({ status, fields }).toEqual({ status: 200, fields: ['token'] });
				expect((await count()).map((rows, at) => rows - (before[at] ?? 0))).toEqual([1, 1, 1]);
			}
		const toStrangers = (await server.api().mail.mailbox()).filter(({ to }) => to.startsWith('nobody'));
		expect(toStrangers).toEqual([]);
	});

	it('is slowed: five wrong codes end the step, whatever comes after', async () => {
		const person = await server.addPerson('Gus Guess');
		const { token } = await askFor(person.email, '203.0.113.60');
		const code = await codeFor(person.email);
		const shown = (tried: string) => refusalCode(server.api().account.signInByCode({ token, code: tried, isOwnDevice: true }));
		const wrong = code.startsWith('9') ? '00000000' : '99999999';
		for (let n = 0; n < 5; n += 1) expect(await shown(wrong)).toBe('WRONG');
		expect(await shown(code)).toBe('WRONG');
	});
});
