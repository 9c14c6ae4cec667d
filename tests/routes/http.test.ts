import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let cookie: string;
beforeAll(async () => {
	server = await openTestServer();
	cookie = (await server.addPerson('Olga Orr')).cookie;
});
afterAll(() => server.close());

const call = (path: string, input: unknown = {}) =>
	server.fetch(`/rpc/${path}`, {
		method: 'POST',
		headers: { 'content-type': 'application/json' },
		body: typeof input === 'string' ? input : JSON.stringify({ json: input }),
		cookie,
	});

/** What would tell of our insides. */
const insides = /\bat .+\.(ts|js|mjs):\d+|node_modules|select |"stack"|relation "|drizzle|Failed query/i;

describe('every answer', () => {
	it('carries a policy that lets nothing in from outside', async () => {
		for (const path of ['/', '/health', '/nothing.txt', '/rpc/nothing', '/api/nothing']) {
			const { headers } = await server.fetch(path);
			const policy = new Map(
				(headers.get('content-security-policy') ?? '').split(';').map((part) => {
					const [name, ...sources] = part.trim().split(' ');
					return [name, sources.join(' ')];
				}),
			);
			expect(policy.get('default-src')).toBe("'self'");
			expect(policy.get('script-src')).toBe("'self' 'wasm-unsafe-eval'");
			expect(policy.get('style-src')).toBe("'self'");
			expect(policy.get('frame-ancestors')).toBe("'none'");
			expect(policy.get('object-src')).toBe("'none'");
			expect([...policy.values()].join(' ')).not.toMatch(/unsafe-inline|unsafe-eval'.*unsafe-eval|https?:|\*/);
			expect(headers.get('x-content-type-options')).toBe('nosniff');
			expect(headers.get('x-frame-options')).toBe('DENY');
			expect(headers.get('x-powered-by')).toBeNull();
			expect(headers.get('strict-transport-security')).toBeNull();
		}
	});

	it('of a call is kept by nobody on the way', async () => {
		expect((await call('site/list')).headers.get('cache-control')).toBe('no-store');
	});
});

describe('what is not there', () => {
	it('is said in the form that was asked for', async () => {
		const page = await server.fetch('/nothing.txt');
		expect(page.status).toBe(404);
		expect(page.headers.get('content-type')).toMatch(/^text\/html/);
		for (const path of ['nothing', 'site/nothing', '__proto__/constructor', 'site']) {
			const answer = await call(path);
			expect(answer.status).toBe(404);
			expect(answer.headers.get('content-type')).toMatch(/^application\/json/);
		}
		// Its escape cannot be decoded; whether a page answers depends on what is built.
		expect((await server.fetch('/%zz')).status).not.toBe(500);
	});

	it('or cannot be read is the sender’s fault', async () => {
		for (const body of ['', '{', '[]', '"x"', '{"json":', '{"json":{"__proto__":{"siteId":"x"}}}', '{"meta":[[1,2]],"json":1}']) {
			const answer = await call('site/found', body);
			expect(answer.status, body).toBeGreaterThanOrEqual(400);
			expect(answer.status, body).toBeLessThan(500);
			expect(await answer.text()).not.toMatch(insides);
		}
	});
});

describe('a fault of ours', () => {
	it('tells nothing of our insides', async () => {
		const { db } = server.platform;
		const siteId = await server.addSite();
		await db.execute(sql`alter table memberships rename to memberships_gone`);
		await db.execute(sql`alter table uploads rename to uploads_gone`);
		const answers = [
			await call('site/list'),
			await call('site/get', { siteId }),
			await server.fetch(`/api/uploads/${'0'.repeat(32)}`, { method: 'DELETE', headers: { 'tus-resumable': '1.0.0' }, cookie }),
			await server.fetch('/api/uploads', {
				method: 'POST',
				headers: { 'tus-resumable': '1.0.0', 'upload-length': '1', 'upload-metadata': `siteId ${btoa(siteId)}` },
				cookie,
			}),
		];
		await db.execute(sql`alter table sessions rename to sessions_gone`);
		answers.push(await call('account/me'));
		for (const answer of answers) {
			const text = await answer.text();
			expect(answer.status, text).toBe(500);
			expect(text).not.toMatch(insides);
			expect(text.length).toBeLessThan(300);
		}
	});
});
