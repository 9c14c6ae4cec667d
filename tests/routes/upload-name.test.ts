import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { takeUpload } from '#server/platform/uploads.ts';
import { uploadFile as sendFile } from '#src/lib/upload.ts';
import { openTestServer, type TestServer } from './harness.ts';

/** What the page's upload would send, held fast instead of sent: the tus client wants a browser. */
const asked = vi.hoisted(() => ({ metadata: {} as Record<string, string>, bytes: 0, begin: async (): Promise<string> => '' }));
vi.mock('tus-js-client', () => ({
	Upload: class {
		url = '';
		readonly #onSuccess: () => void;
		constructor(file: File, options: { metadata: Record<string, string>; onSuccess: () => void }) {
			Object.assign(asked, { metadata: options.metadata, bytes: file.size });
			this.#onSuccess = options.onSuccess;
		}
		findPreviousUploads = async () => [];
		start(): void {
			void asked.begin().then((url) => {
				this.url = url;
				this.#onSuccess();
			});
		}
	},
}));

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
	vi.stubGlobal('window', { location: { origin: server.address } });
});
afterAll(async () => {
	vi.unstubAllGlobals();
	await server.close();
});

describe('a file sent from a page', () => {
	it('keeps its name: the page says it under the word that the server looks for', async () => {
		const siteId = await server.addSite();
		const engineer = await server.addMember(siteId, ['site-engineer']);
		const tus = { 'tus-resumable': '1.0.0' };
		asked.begin = async () => {
			const metadata = Object.entries(asked.metadata).map(([key, value]) => `${key} ${Buffer.from(value).toString('base64')}`);
			const begun = await server.fetch('/api/uploads', {
				method: 'POST',
				cookie: engineer.cookie,
				headers: { ...tus, 'upload-length': String(asked.bytes), 'upload-metadata': metadata.join(',') },
			});
			const place = begun.headers.get('location') ?? '';
			await server.fetch(place, {
				method: 'PATCH',
				cookie: engineer.cookie,
				headers: { ...tus, 'upload-offset': '0', 'content-type': 'application/offset+octet-stream' },
				body: new Uint8Array(asked.bytes),
			});
			return `${server.address}${place}`;
		};
		const file = new File([new Uint8Array(12)], 'Tragwerk Süd, rev 5.ifc');
		const uploadId = await sendFile({ file, siteId, userId: engineer.userId, purpose: 'model' });
		expect(await takeUpload(server.platform, engineer, uploadId)).toMatchObject({ fileName: 'Tragwerk Süd, rev 5.ifc', bytes: 12 });
	});
});
