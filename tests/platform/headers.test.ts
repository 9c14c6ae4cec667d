import type { AddressInfo } from 'node:net';
import express from 'express';
import { describe, expect, it } from 'vitest';
import { securityHeaders } from '../../server/app/headers.ts';

async function headersWith(settings: { isSecure: boolean; isDevelopment: boolean }): Promise<Headers> {
	const app = express();
	app.use(securityHeaders(settings));
	// An answer of ours: the library's own 404 page brings a policy of its own.
	app.get('/', (_request, response) => void response.send('here'));
	const server = app.listen(0, '127.0.0.1');
	await new Promise((resolve) => server.once('listening', resolve));
	const { headers } = await fetch(`http://127.0.0.1:${(server.address() as AddressInfo).port}/`);
	server.close();
	return headers;
}

describe('the headers', () => {
	it('ask for TLS from then on only where cookies are bound to it', async () => {
		expect((await headersWith({ isSecure: true, isDevelopment: false })).get('strict-transport-security')).toMatch(/^max-age=15552000/);
		expect((await headersWith({ isSecure: false, isDevelopment: false })).get('strict-transport-security')).toBeNull();
	});

	it('leave the policy out only while developing', async () => {
		expect((await headersWith({ isSecure: true, isDevelopment: false })).get('content-security-policy')).toContain("default-src 'self'");
		expect((await headersWith({ isSecure: true, isDevelopment: true })).get('content-security-policy')).toBeNull();
	});
});
