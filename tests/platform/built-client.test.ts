import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { get } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { gunzipSync } from 'node:zlib';
import express from 'express';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { builtClient } from '../../server/app/built-client.ts';

const base = mkdtempSync(join(tmpdir(), 'bb-client-'));
const script = `console.log(${JSON.stringify('x'.repeat(5000))});`;
let address: string;
let close: () => void;
beforeAll(async () => {
	mkdirSync(join(base, 'client/assets'), { recursive: true });
	writeFileSync(join(base, 'client/index.html'), '<!doctype html><title>page</title>');
	writeFileSync(join(base, 'client/assets/main-3f2a.js'), script);
	writeFileSync(join(base, 'client/mark.png'), new Uint8Array([137, 80, 78, 71]));
	writeFileSync(join(base, 'secret.txt'), 'secret');
	const app = express();
	app.use(builtClient(join(base, 'client')));
	app.use((_request, response) => void response.status(404).send('none'));
	const server = app.listen(0, '127.0.0.1');
	await new Promise((resolve) => server.once('listening', resolve));
	address = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
	close = () => server.close();
});
afterAll(() => {
	close();
	rmSync(base, { recursive: true, force: true });
});

/** The bytes as they travel: `fetch` would unpack them. */
function raw(path: string, headers: Record<string, string> = {}) {
	return new Promise<{ status: number; headers: Record<string, unknown>; body: Buffer }>((resolve, reject) => {
		get(`${address}${path}`, { headers }, (answer) => {
			const parts: Buffer[] = [];
			answer.on('data', (part: Buffer) => parts.push(part));
			answer.on('end', () => resolve({ status: answer.statusCode ?? 0, headers: answer.headers, body: Buffer.concat(parts) }));
		}).on('error', reject);
	});
}

describe('the built client', () => {
	it('is kept for good by hashed name, and asked for each time as a page', async () => {
		expect((await raw('/assets/main-3f2a.js')).headers['cache-control']).toBe('public, max-age=31536000, immutable');
		for (const path of ['/', '/index.html', '/sites/7/checks']) {
			const answer = await raw(path);
			expect(answer.body.toString()).toContain('<title>page</title>');
			expect(answer.headers).toMatchObject({ 'cache-control': 'no-cache', 'content-type': 'text/html; charset=utf-8' });
		}
	});

	it('travels packed to who can unpack it, twice the same', async () => {
		for (let n = 0; n < 2; n += 1) {
			const packed = await raw('/assets/main-3f2a.js', { 'accept-encoding': 'gzip, br' });
			expect(packed.headers).toMatchObject({
				'content-encoding': 'gzip',
				vary: 'accept-encoding',
				'content-length': String(packed.body.length),
			});
			expect(packed.body.length).toBeLessThan(script.length / 10);
			expect(gunzipSync(packed.body).toString()).toBe(script);
		}
		const plain = await raw('/assets/main-3f2a.js', { 'accept-encoding': 'identity' });
		expect(plain.headers['content-encoding']).toBeUndefined();
		expect(plain.body.toString()).toBe(script);
		expect((await raw('/mark.png', { 'accept-encoding': 'gzip' })).headers['content-encoding']).toBeUndefined();
	});

	it('is not sent again to who has it', async () => {
		const etag = String((await raw('/')).headers.etag);
		const again = await raw('/', { 'if-none-match': etag });
		expect(again.status).toBe(304);
		expect(again.body).toHaveLength(0);
	});

	it('gives nothing that is not in its folder', async () => {
		for (const path of [
			'/../secret.txt',
			'/%2e%2e/secret.txt',
			'/assets/..%2f..%2f..%2fsecret.txt',
			'/missing.js',
			'/assets/missing.css',
		]) {
			const answer = await raw(path);
			expect(answer.status, path).toBe(404);
			expect(answer.body.toString()).not.toContain('secret');
		}
		expect((await fetch(address, { method: 'POST' })).status).toBe(404);
	});
});
