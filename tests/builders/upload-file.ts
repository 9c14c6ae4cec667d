import { expect } from 'vitest';
import type { TestServer } from '../routes/harness.ts';

interface Uploader {
	siteId: string;
	cookie: string;
}

/** Brings a file the way a browser does (tus 1.0, one piece) and answers the upload's id. */
export async function uploadFile(server: TestServer, uploader: Uploader, fileName: string, content: string | Uint8Array): Promise<string> {
	const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
	const base64 = (text: string) => Buffer.from(text, 'utf8').toString('base64');
	const tus = { 'tus-resumable': '1.0.0' };
	const begun = await server.fetch('/api/uploads', {
		method: 'POST',
		cookie: uploader.cookie,
		headers: {
			...tus,
			'upload-length': String(bytes.byteLength),
			'upload-metadata': `filename ${base64(fileName)},siteId ${base64(uploader.siteId)}`,
		},
	});
	expect(begun.status, await begun.clone().text()).toBe(201);
	const place = begun.headers.get('location') ?? '';
	if (bytes.byteLength > 0) {
		const sent = await server.fetch(place, {
			method: 'PATCH',
			cookie: uploader.cookie,
			headers: { ...tus, 'upload-offset': '0', 'content-type': 'application/offset+octet-stream' },
			body: new Uint8Array(bytes),
		});
		expect(sent.status, await sent.clone().text()).toBe(204);
	}
	return place.split('/').at(-1) ?? '';
}
