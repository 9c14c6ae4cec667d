import { createHash, randomBytes } from 'node:crypto';
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { request } from 'node:http';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { uploads } from '../../server/db/schema/file.ts';
import { memberships } from '../../server/db/schema/site.ts';
import type { Member } from '../../server/platform/platform.ts';
import { openUploads } from '../../server/platform/upload-server.ts';
import { takeUpload, uploadPath, useUpload } from '../../server/platform/uploads.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let siteId: string;
let engineer: Member & { cookie: string };
beforeAll(async () => {
	server = await openTestServer({ largestUploadBytes: 2_000_000 });
	siteId = await server.addSite();
	engineer = await server.addMember(siteId, ['site-engineer']);
});
afterAll(() => server.close());

const tus = { 'tus-resumable': '1.0.0' };
const metadata = (values: Record<string, string>) =>
	Object.entries(values)
		.map(([key, value]) => `${key} ${Buffer.from(value).toString('base64')}`)
		.join(',');

const create = (cookie: string | undefined, bytes: number, values: Record<string, string> = { siteId, filename: 'points.csv' }) =>
	server.fetch('/api/uploads', {
		method: 'POST',
		headers: { ...tus, 'upload-length': String(bytes), 'upload-metadata': metadata(values) },
		...(cookie === undefined ? {} : { cookie }),
	});

async function begin(cookie: string, bytes: number, values?: Record<string, string>): Promise<string> {
	const created = await create(cookie, bytes, values);
	expect(created.status).toBe(201);
	const location = created.headers.get('location') ?? '';
	expect(location).toMatch(/^\/api\/uploads\/[0-9a-f]{32}$/);
	return location;
}

const offsetOf = async (location: string, cookie = engineer.cookie) => {
	const answer = await server.fetch(location, { method: 'HEAD', headers: tus, cookie });
	return { status: answer.status, offset: Number(answer.headers.get('upload-offset')) };
};

const send = (location: string, bytes: Uint8Array<ArrayBuffer>, offset: number, cookie = engineer.cookie) =>
	server.fetch(location, {
		method: 'PATCH',
		headers: { ...tus, 'upload-offset': String(offset), 'content-type': 'application/offset+octet-stream' },
		body: bytes,
		cookie,
	});

/** Sends some of the bytes and tears the connection. */
function sendCut(location: string, bytes: Uint8Array, offset: number, sent: number): Promise<void> {
	return new Promise((resolve) => {
		const call = request(`${server.address}${location}`, {
			method: 'PATCH',
			headers: {
				...tus,
				origin: server.address,
				cookie: engineer.cookie,
				'upload-offset': String(offset),
				'content-type': 'application/offset+octet-stream',
				'content-length': bytes.length - offset,
			},
		});
		call.on('error', () => resolve());
		call.on('close', () => resolve());
		call.write(bytes.subarray(offset, offset + sent), () => setTimeout(() => call.destroy(), 30));
	});
}

const idOf = (location: string) => location.split('/').at(-1) ?? '';

describe('an upload', () => {
	it('goes on after every cut, and arrives whole', async () => {
		const bytes = new Uint8Array(randomBytes(1_200_000));
		const location = await begin(engineer.cookie, bytes.length);
		let offset = 0;
		for (const share of [1, 40_000, 65_536, 200_001, 333_333]) {
			await sendCut(location, bytes, offset, share);
			await expect.poll(async () => (await offsetOf(location)).status).toBe(200);
			offset = (await offsetOf(location)).offset;
			expect(offset).toBeLessThan(bytes.length);
		}
		expect(offset).toBeGreaterThan(0);
		await expect(takeUpload(server.platform, engineer, idOf(location))).rejects.toMatchObject({ code: 'upload-unfinished' });
		const rest = await send(location, bytes.slice(offset), offset);
		expect(rest.status).toBe(204);
		const taken = await takeUpload(server.platform, engineer, idOf(location));
		expect(taken).toMatchObject({ fileName: 'points.csv', bytes: bytes.length });
		expect(createHash('sha256').update(readFileSync(taken.path)).digest('hex')).toBe(createHash('sha256').update(bytes).digest('hex'));
		const [row] = await server.platform.db
			.select()
			.from(uploads)
			.where(eq(uploads.id, idOf(location)));
		expect(row?.finishedAt).not.toBeNull();
	});

	it('is for whoever began it, on that site, once', async () => {
		const bytes = new Uint8Array(Buffer.from('1,2,3\n'));
		const location = await begin(engineer.cookie, bytes.length);
		const colleague = await server.addMember(siteId, ['site-engineer', 'project-engineer']);
		expect((await offsetOf(location, colleague.cookie)).status).toBe(404);
		expect((await send(location, bytes, 0, colleague.cookie)).status).toBe(404);
		expect((await server.fetch(location, { method: 'DELETE', headers: tus, cookie: colleague.cookie })).status).toBe(404);
		expect((await send(location, bytes, 0)).status).toBe(204);
		expect((await server.fetch(location, { cookie: engineer.cookie })).status).toBe(405);
		const { platform } = server;
		const uploadId = idOf(location);
		await expect(takeUpload(platform, colleague, uploadId)).rejects.toThrow('There is no such thing here');
		await expect(takeUpload(platform, { ...engineer, siteId: await server.addSite('B') }, uploadId)).rejects.toThrow('no such thing');

		const { path } = await takeUpload(platform, engineer, uploadId);
		const kept = await platform.files.keepFrom(path);
		expect(Buffer.from(await platform.files.read(kept.sha256)).toString()).toBe('1,2,3\n');
		await platform.transaction((tx) => useUpload(tx, uploadId, kept, platform.now()));
		await expect(takeUpload(platform, engineer, uploadId)).rejects.toMatchObject({ code: 'upload-used' });
		await expect(platform.transaction((tx) => useUpload(tx, uploadId, kept, platform.now()))).rejects.toThrow('just put to use');
		expect((await offsetOf(location)).status).toBe(404);
	});

	it('over the limit is refused before a byte is sent, and cannot grow past what it announced', async () => {
		expect((await create(engineer.cookie, 2_000_001)).status).toBe(413);
		const location = await begin(engineer.cookie, 10);
		const answer = await send(location, new Uint8Array(11), 0);
		expect(answer.status).toBeGreaterThanOrEqual(400);
		expect((await offsetOf(location)).offset).toBeLessThanOrEqual(10);
		const deferred = await server.fetch('/api/uploads', {
			method: 'POST',
			headers: { ...tus, 'upload-defer-length': '1', 'upload-metadata': metadata({ siteId }) },
			cookie: engineer.cookie,
		});
		expect(deferred.status).toBe(400);
	});

	it('is begun only by a member who may bring files', async () => {
		expect((await create(undefined, 10)).status).toBe(401);
		expect((await create((await server.addMember(siteId, ['observer'])).cookie, 10)).status).toBe(403);
		// Photos of a flag, no more.
		const companyId = await server.addCompany(siteId, 'Fennick Forms');
		for (const member of [
			await server.addMember(siteId, ['owners-representative']),
			await server.addMember(siteId, ['contractor'], companyId),
		])
			expect((await create(member.cookie, 10)).status).toBe(201);
		expect((await create((await server.addPerson('No Member')).cookie, 10)).status).toBe(404);
		for (const values of [{ siteId: await server.addSite('Not theirs') }, { siteId: 'x' }, { filename: 'a' }]) {
			expect((await create(engineer.cookie, 10, values as Record<string, string>)).status).toBe(404);
		}
	});

	it('stops with the membership', async () => {
		const leaver = await server.addMember(siteId, ['site-engineer']);
		const location = await begin(leaver.cookie, 10);
		await server.platform.db.update(memberships).set({ leftAt: new Date() }).where(eq(memberships.userId, leaver.userId));
		expect((await send(location, new Uint8Array(10), 0, leaver.cookie)).status).toBe(404);
	});

	it('comes only from a page of ours', async () => {
		for (const origin of ['https://elsewhere.example', 'null']) {
			const answer = await fetch(`${server.address}/api/uploads`, {
				method: 'POST',
				headers: { ...tus, origin, cookie: engineer.cookie, 'upload-length': '10', 'upload-metadata': metadata({ siteId }) },
			});
			expect(answer.status).toBe(403);
			expect(answer.headers.get('access-control-allow-origin')).toBeNull();
		}
		expect((await create(engineer.cookie, 10)).headers.get('access-control-allow-origin')).toBeNull();
	});

	it('has a name that is only shown', async () => {
		const location = await begin(engineer.cookie, 1, { siteId, filename: '..\\..\\etc/pass\u202ewd\n.csv' });
		expect((await send(location, new Uint8Array(1), 0)).status).toBe(204);
		const { fileName, path } = await takeUpload(server.platform, engineer, idOf(location));
		expect(fileName).toBe('passwd.csv');
		expect(path).toBe(uploadPath(server.platform.uploadFolder, idOf(location)));
		for (const uploadId of ['../../etc/passwd', `${idOf(location)}.json`, '%2e%2e%2fpasswd', 'x'.repeat(32)]) {
			await expect(takeUpload(server.platform, engineer, uploadId)).rejects.toMatchObject({ code: 'bad-upload' });
			expect((await offsetOf(`/api/uploads/${encodeURIComponent(uploadId)}`)).status).toBe(404);
		}
	});

	it('whose end was not noted is taken all the same: the bytes tell', async () => {
		const location = await begin(engineer.cookie, 3);
		await send(location, new Uint8Array(3), 0);
		await server.platform.db
			.update(uploads)
			.set({ finishedAt: null })
			.where(eq(uploads.id, idOf(location)));
		expect(await takeUpload(server.platform, engineer, idOf(location))).toMatchObject({ bytes: 3 });
	});

	it('left lying for a week is swept at the next start, a younger one stays', async () => {
		const [old, young] = [await begin(engineer.cookie, 3), await begin(engineer.cookie, 3)];
		await server.platform.db
			.update(uploads)
			.set({ begunAt: new Date(Date.now() - 8 * 24 * 3_600_000) })
			.where(eq(uploads.id, idOf(old)));
		await openUploads({ platform: server.platform, path: '/api/uploads', largestBytes: 10 }).sweep();
		expect(existsSync(uploadPath(server.platform.uploadFolder, idOf(old)))).toBe(false);
		expect(readdirSync(server.platform.uploadFolder)).toContain(idOf(young));
		expect((await offsetOf(old)).status).toBe(404);
		expect((await offsetOf(young)).status).toBe(200);
	});
});
