import { randomUUID } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { and, eq } from 'drizzle-orm';
import { type ParsedMail, simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { mails } from '../../server/db/schema/mail.ts';
import type { Letter } from '../../server/platform/letter.ts';
import type { MailService, OutgoingMail } from '../../server/platform/mail.ts';
import { MailRefused } from '../../server/platform/mail.ts';
import { startFakeMailService } from '../../server/platform/mail-fake.ts';
import { resendMail } from '../../server/platform/mail-resend.ts';
import { smtpMail } from '../../server/platform/mail-smtp.ts';
import { postMail } from '../../server/platform/post-mail.ts';
import { deliverDue } from '../../server/platform/postman.ts';
import { openTestServer, type TestServer } from './harness.ts';

const letter: Letter = {
	subject: 'Survey 3 <b>is</b> in',
	headline: 'Müller & Sons: “survey 3” <script>alert(1)</script>',
	paragraphs: ['Two set-ups.'],
	act: { word: 'See it', url: 'https://board.example/sites?a=1&b="2"' },
	notes: [{ words: 'Not you?', url: 'https://board.example/no' }],
};

let server: TestServer;
let dark: TestServer;
beforeAll(async () => {
	server = await openTestServer();
	// Without a service nothing is taken from the outbox: it is the tests' own to send.
	dark = await openTestServer({ mail: { kind: 'none' } });
});
afterAll(() => Promise.all([server.close(), dark.close()]));
beforeEach(() => dark.platform.db.delete(mails));

const post = (to: string, at = new Date()) => dark.platform.transaction((tx) => postMail(tx, { to, letter, now: at }));
const rows = () => dark.platform.db.select().from(mails);

/** A service that notes what it was given and answers as told. */
function service(answer: (mail: OutgoingMail) => Promise<void>, isIdempotent = true): MailService & { given: OutgoingMail[] } {
	const given: OutgoingMail[] = [];
	return { isIdempotent, given, close: async () => {}, send: (mail) => answer(given[given.push(mail) - 1]!) };
}
const deliver = (mailService: MailService, now = new Date()) => deliverDue({ db: dark.platform.db, service: mailService, now: () => now });

describe('the outbox', () => {
	it('sends each mail once, also where two look into it at once, and forgets the links in it', async () => {
		for (let n = 0; n < 6; n += 1) await post(`person.${n}@example.com`);
		const slow = service(() => wait(5));
		const sent = await Promise.all([deliver(slow), deliver(slow)]);
		expect(sent[0]! + sent[1]!).toBe(6);
		expect(new Set(slow.given.map(({ to }) => to)).size).toBe(6);
		expect(slow.given).toHaveLength(6);
		for (const row of await rows()) expect(row).toMatchObject({ state: 'sent', text: null, html: null, tries: 1 });
	});

	it('is empty of a mail whose transaction rolled back', async () => {
		const broken = dark.platform.transaction(async (tx) => {
			await postMail(tx, { to: 'a@example.com', letter, now: new Date() });
			throw new Error('No.');
		});
		await expect(broken).rejects.toThrow('No.');
		expect(await rows()).toEqual([]);
	});

	it('tries again after a pause, under the same id, and gives up after the seventh time', async () => {
		await post('a@example.com');
		const down = service(() => Promise.reject(new Error('down')));
		let now = Date.now() + 1000;
		expect(await deliver(down, new Date(now))).toBe(0);
		expect(await deliver(down, new Date(now + 5000))).toBe(0);
		expect(down.given).toHaveLength(1);
		for (let n = 0; n < 10; n += 1) {
			now += 5 * 3_600_000;
			await deliver(down, new Date(now));
		}
		expect(down.given).toHaveLength(7);
		expect(new Set(down.given.map(({ mailId }) => mailId)).size).toBe(1);
		expect(await rows()).toMatchObject([{ state: 'failed', text: null, lastFault: 'down' }]);
	});

	it('gives up at once what the service will never take', async () => {
		await post('a@example.com');
		const refusing = service(() => Promise.reject(new MailRefused('no such address')));
		await deliver(refusing, new Date(Date.now() + 1000));
		expect(await rows()).toMatchObject([{ state: 'failed', lastFault: 'no such address' }]);
	});

	it('repeats a sending that a crash cut off only where the service sends the same id once', async () => {
		const folder = mkdtempSync(join(tmpdir(), 'bb-fake-'));
		const fake = await startFakeMailService(folder);
		const real = resendMail({ apiKey: fake.apiKey, from: 'a@example.com', baseUrl: fake.baseUrl });
		await post('a@example.com');
		// Taken by the service, and the note of it lost: what a kill -9 between the two leaves.
		const [row] = await rows();
		await real.send({ mailId: row!.id, to: row!.toAddress, subject: row!.subject, text: row!.text!, html: row!.html! });
		await dark.platform.db.update(mails).set({ state: 'sending', tries: 1, dueAt: new Date(Date.now() + 60_000) });
		expect(await deliver(real)).toBe(0);
		expect(await deliver(real, new Date(Date.now() + 130_000))).toBe(1);
		expect(await fake.mailbox.list()).toHaveLength(1);
		await fake.close();
		// The fake itself comes back with what it had.
		const again = await startFakeMailService(folder);
		expect(await again.mailbox.list()).toMatchObject([{ to: 'a@example.com', subject: letter.subject }]);
		await again.close();
		rmSync(folder, { recursive: true });

		await dark.platform.db.delete(mails);
		await post('b@example.com');
		await dark.platform.db.update(mails).set({ state: 'sending', tries: 1, dueAt: new Date() });
		const smtp = service(async () => {}, false);
		await deliver(smtp, new Date(Date.now() + 1000));
		expect(smtp.given).toEqual([]);
		expect(await rows()).toMatchObject([{ state: 'uncertain', text: null }]);
	});
});

describe('a letter', () => {
	it('holds as HTML nothing that people typed as markup, and as text its links on lines of their own', async () => {
		await post('a@example.com');
		const [row] = await rows();
		expect(row!.html).not.toContain('<script>');
		expect(row!.html).toContain('href="https://board.example/sites?a=1&amp;b=&quot;2&quot;"');
		expect(row!.html).not.toMatch(/<img|src=|@import|url\(/);
		expect(row!.text!.split('\n')).toContain('https://board.example/no');
	});
});

describe('the services', () => {
	it('by SMTP deliver text, HTML and umlauts, and tell what is final from what may pass', async () => {
		const taken: ParsedMail[] = [];
		const smtpServer = new SMTPServer({
			disabledCommands: ['STARTTLS', 'AUTH'],
			onRcptTo: ({ address }, _session, callback) => {
				if (address.startsWith('final')) return callback(Object.assign(new Error('no such box'), { responseCode: 550 }));
				if (address.startsWith('later')) return callback(Object.assign(new Error('busy'), { responseCode: 451 }));
				callback();
			},
			onData: (stream, _session, callback) => {
				simpleParser(stream).then((mail) => {
					taken.push(mail);
					callback();
				}, callback);
			},
		});
		await new Promise<void>((resolve) => smtpServer.listen(0, '127.0.0.1', () => resolve()));
		const bound = smtpServer.server.address();
		const smtp = smtpMail({ url: `smtp://127.0.0.1:${typeof bound === 'object' ? bound?.port : ''}`, from: 'Site office <a@example.com>' });
		const mail = { mailId: randomUUID(), to: 'b@example.com', subject: 'Grüße', text: 'Prüfung', html: '<p>Prüfung</p>' };
		await smtp.send(mail);
		expect(taken).toMatchObject([{ subject: 'Grüße', html: '<p>Prüfung</p>', messageId: `<${mail.mailId}@batterboard>` }]);
		await expect(smtp.send({ ...mail, to: 'final@example.com' })).rejects.toBeInstanceOf(MailRefused);
		await expect(smtp.send({ ...mail, to: 'later@example.com' })).rejects.not.toBeInstanceOf(MailRefused);
		await smtp.close();
		await new Promise<void>((resolve) => smtpServer.close(() => resolve()));
	});

	it('by the SDK send one mail a key, and refuse another body under the same key, and another key holder', async () => {
		const folder = mkdtempSync(join(tmpdir(), 'bb-fake-'));
		const fake = await startFakeMailService(folder);
		const real = resendMail({ apiKey: fake.apiKey, from: 'a@example.com', baseUrl: fake.baseUrl });
		const mail = { mailId: randomUUID(), to: 'b@example.com', subject: 'S', text: 'T', html: '<p>T</p>' };
		await Promise.all([real.send(mail), real.send(mail), real.send(mail)]);
		expect(await fake.mailbox.list()).toHaveLength(1);
		await expect(real.send({ ...mail, text: 'other' })).rejects.toThrow(/idempotency key/);
		const stranger = resendMail({ apiKey: 're_wrong_key', from: 'a@example.com', baseUrl: fake.baseUrl });
		await expect(stranger.send({ ...mail, mailId: randomUUID() })).rejects.toThrow(/API key/);
		expect(await fake.mailbox.list()).toHaveLength(1);
		await fake.close();
		rmSync(folder, { recursive: true });
	});
});

describe('the mailbox', () => {
	it('shows what the server sent by itself, as text and as HTML that can do nothing', async () => {
		await server.platform.transaction((tx) => postMail(tx, { to: 'c@example.com', letter, now: new Date() }));
		const arrived = async () => (await server.api().mail.mailbox()).find(({ to }) => to === 'c@example.com');
		for (let n = 0; n < 100 && (await arrived()) === undefined; n += 1) await wait(100);
		const mail = await arrived();
		expect(mail?.text).toContain('Two set-ups.');
		const html = await server.fetch(`/api/mailbox/${mail?.keptId}`);
		expect(html.status).toBe(200);
		expect(html.headers.get('content-security-policy')).toMatch(/default-src 'none'.*sandbox/);
		expect((await server.fetch('/api/mailbox/..%2f..%2fpackage.json')).status).toBe(404);
		const [row] = await server.platform.db
			.select()
			.from(mails)
			.where(and(eq(mails.toAddress, 'c@example.com'), eq(mails.state, 'sent')));
		expect(row).toBeDefined();
	});

	it('is not there where no fake stands in for a service', async () => {
		await expect(dark.api().mail.mailbox()).rejects.toMatchObject({ code: 'NOT_FOUND' });
		expect((await dark.fetch(`/api/mailbox/${randomUUID()}`)).status).toBe(404);
	});
});
