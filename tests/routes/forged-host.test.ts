import { connect } from 'node:net';
import { setTimeout as wait } from 'node:timers/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

/** What no browser sends: a request written by hand, with whatever Host. Answers the status line's number. */
function raw(path: string, input: unknown, headers: Record<string, string>): Promise<number> {
	const { hostname, port } = new URL(server.address);
	const body = JSON.stringify({ json: input });
	const lines = Object.entries({
		'content-type': 'application/json',
		'content-length': String(Buffer.byteLength(body)),
		connection: 'close',
		...headers,
	}).map(([name, value]) => `${name}: ${value}\r\n`);
	return new Promise((resolve, reject) => {
		let answer = '';
		const socket = connect(Number(port), hostname, () => socket.write(`POST ${path} HTTP/1.1\r\n${lines.join('')}\r\n${body}`));
		socket.setEncoding('utf8').on('data', (text: string) => {
			answer += text;
		});
		socket.on('error', reject).on('close', () => resolve(Number(/^HTTP\/1\.1 (\d{3})/.exec(answer)?.[1] ?? 0)));
	});
}

describe('a forged Host', () => {
	it('never gets into a mailed link, though Origin and X-Forwarded-Host claim the same', async () => {
		const person = await server.addPerson('Hana Host', 'north river 31 crane barrow');
		const forged = {
			host: 'evil.example',
			origin: 'http://evil.example',
			'x-forwarded-host': 'evil.example',
			forwarded: 'host=evil.example',
		};
		expect(await raw('/rpc/account/askReset', { email: person.email }, forged)).toBe(200);
		for (let n = 0; n < 150; n += 1) {
			const mail = (await server.api().mail.mailbox()).find(({ to }) => to === person.email);
			if (mail !== undefined) {
				expect(mail.text).toContain(`${server.address}/reset#`);
				expect(`${mail.text}${mail.subject}`).not.toContain('evil');
				return;
			}
			await wait(100);
		}
		throw new Error('No mail came.');
	});

	it('of another address than the Origin’s is refused, and so is a request without Host', async () => {
		const { host } = new URL(server.address);
		const me = (headers: Record<string, string>) => raw('/rpc/account/me', undefined, headers);
		expect(await me({ host, origin: 'http://evil.example' })).toBe(403);
		expect(await me({ host: 'evil.example', origin: server.address })).toBe(403);
		expect(await me({ origin: server.address })).toBe(400);
		expect(await me({ host, origin: server.address })).toBe(200);
	});
});
