import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { flagPhotos } from '../../server/db/schema/flag.ts';
import { photoAddresses } from '../../server/platform/photo-addresses.ts';
import { aSite } from '../builders/a-site.ts';
import { raiseFlags } from '../builders/raised-flags.ts';
import { uploadFile } from '../builders/upload-file.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer({ largestUploadBytes: 500_000_000 });
});
afterAll(() => server.close());

const grey = (width: number, height: number) => sharp({ create: { width, height, channels: 3, background: { r: 90, g: 90, b: 90 } } });

async function flagged() {
	const site = await aSite(server);
	const { flagIds } = await raiseFlags(server, site, 1);
	const flagId = flagIds[0]!;
	const { siteId } = site;
	type Person = typeof site.contractor;
	const add = async (who: Person, name: string, bytes: Uint8Array) =>
		who.api.flag.addPhoto({ siteId, flagId, uploadId: await uploadFile(server, who, name, bytes) });
	return { ...site, flagId, add };
}

describe('a photo through the server', () => {
	it('of a phone is kept as it came and shown upright without where it was taken', async () => {
		const { contractor, engineer, owner, observer, flagId, siteId, add } = await flagged();
		const exif = {
			IFD0: { Make: 'Secret maker' },
			IFD3: { GPSLatitudeRef: 'N', GPSLatitude: '51/1 30/1 0/1', GPSLongitude: '0/1 7/1 0/1' },
		};
		const original = await grey(300, 200).withExif(exif).withMetadata({ orientation: 6 }).jpeg().toBuffer();
		expect(original.includes('Secret maker')).toBe(true);
		const photo = await add(contractor, 'IMG_0001.png', original);
		expect(photo).toMatchObject({ format: 'jpeg', widthPx: 300, heightPx: 200, addedBy: contractor.name });
		const answer = await server.fetch(photo.shownAt!);
		expect(answer.status).toBe(200);
		expect(Object.fromEntries(answer.headers)).toMatchObject({ 'content-type': 'image/jpeg', 'x-content-type-options': 'nosniff' });
		const shown = Buffer.from(await answer.arrayBuffer());
		const seen = await sharp(shown).metadata();
		expect([seen.exif, seen.xmp, seen.iptc, seen.width, seen.height]).toEqual([undefined, undefined, undefined, 200, 300]);
		expect(shown.includes('Secret maker')).toBe(false);
		const kept = Buffer.from(await server.platform.photos.read(photo.originalSha256));
		expect(kept.equals(original)).toBe(true);
		// Twice is refused, so that a photo sent again from a phone is there once.
		await expect(add(contractor, 'again.jpg', original)).rejects.toMatchObject({ data: { code: 'photo-there' } });
		expect((await engineer.api.flag.get({ siteId, flagId })).photos).toHaveLength(1);
		await add(owner, 'seen.png', await grey(20, 10).png().toBuffer());
		const uploadId = await uploadFile(server, contractor, 'x.jpg', await grey(9, 9).jpeg().toBuffer());
		await expect(observer.api.flag.addPhoto({ siteId, flagId, uploadId })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		await expect(engineer.api.flag.addPhoto({ siteId, flagId, uploadId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});

	it('may be a HEIC, shown as a JPEG', async () => {
		const { contractor, add } = await flagged();
		const original = readFileSync(new URL('../../fixtures/photos/made-gradient.heic', import.meta.url));
		const photo = await add(contractor, 'IMG_0002.HEIC', original);
		expect(photo).toMatchObject({ format: 'heic', widthPx: 64, heightPx: 48 });
		const answer = await server.fetch(photo.shownAt!);
		expect(answer.headers.get('content-type')).toBe('image/jpeg');
		const shown = sharp(Buffer.from(await answer.arrayBuffer()));
		expect(await shown.metadata()).toMatchObject({ format: 'jpeg', width: 64, height: 48 });
		// Red above, blue below, as it was made.
		const { data, info } = await shown.raw().toBuffer({ resolveWithObject: true });
		const pixel = (row: number) => [...data.subarray(row * info.width * 3, row * info.width * 3 + 3)];
		expect([pixel(1)[0]! > 180, pixel(1)[2]! < 80, pixel(46)[0]! < 80, pixel(46)[2]! > 180]).toEqual([true, true, true, true]);
	});

	it('has an address for minutes: expired, altered, or another server’s, it shows nothing', async () => {
		const { contractor, add } = await flagged();
		const { shownAt, originalSha256 } = await add(contractor, 'a.jpg', await grey(30, 20).jpeg().toBuffer());
		const [row] = await server.platform.db.select().from(flagPhotos).where(eq(flagPhotos.originalSha256, originalSha256));
		const photo = { sha256: row!.shownSha256!, type: 'image/jpeg' as const };
		const status = async (path: string) => (await server.fetch(path)).headers.get('content-type')?.startsWith('image/') ?? false;
		expect(await status(shownAt!)).toBe(true);
		const [sha256, kind, until, signature] = shownAt!.split('/').at(-1)!.split('.') as [string, string, string, string];
		const later = (Number.parseInt(until, 36) + 3_600_000).toString(36);
		const altered = [
			[originalSha256, kind, until, signature],
			[sha256, 'png', until, signature],
			[sha256, kind, later, signature],
			[sha256, kind, until, `${signature.slice(0, -2)}AA`],
			[sha256, kind, until],
		];
		for (const parts of altered) expect(await status(`/api/photos/${parts.join('.')}`), parts.join('.')).toBe(false);
		// Signed by another server's key, and by this one's an hour ago.
		expect(await status(photoAddresses(() => new Date()).of(photo))).toBe(false);
		const now = server.platform.now();
		expect(server.platform.photoAddresses.read(shownAt!.split('/').at(-1)!)).toEqual(photo);
		const key = Buffer.alloc(32, 3);
		const old = photoAddresses(() => new Date(now.getTime() - 3_600_000), key).of(photo);
		expect(photoAddresses(() => now, key).read(old.split('/').at(-1)!)).toBeNull();
	});

	it('that is another site’s or company’s is not there', async () => {
		const one = await flagged();
		const two = await flagged();
		const other = await server.addMember(one.siteId, ['contractor'], one.otherCompanyId);
		const uploadId = await uploadFile(server, other, 'x.jpg', await grey(9, 9).jpeg().toBuffer());
		for (const [who, siteId] of [
			[other, one.siteId],
			[two.contractor, one.siteId],
			[two.contractor, two.siteId],
		] as const)
			await expect(who.api.flag.addPhoto({ siteId, flagId: one.flagId, uploadId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		expect((await one.engineer.api.flag.get({ siteId: one.siteId, flagId: one.flagId })).photos).toEqual([]);
	});

	it('that is none, 50 000 pixels wide, or 100 MB is refused with its sentence, and nothing is kept', async () => {
		const { contractor, surveyor, siteId, flagId, add } = await flagged();
		const refusal = async (name: string, bytes: Uint8Array, who = contractor) =>
			add(who, name, bytes).then(
				() => 'taken',
				(error: { data?: { code?: string }; message: string }) => `${error.data?.code}: ${error.message}`,
			);
		expect(await refusal('a.jpg', new TextEncoder().encode('<svg onload="alert(1)"/>'))).toBe(
			'not-a-photo: a.jpg: This is no JPEG, PNG or HEIC picture, whatever its name says. Nothing was kept.',
		);
		expect(await refusal('wide.png', await grey(50_000, 3).png().toBuffer())).toMatch(
			/^photo-too-large: wide\.png: This picture is too large\. It is 50000 × 3 pixels; .* Nothing was kept\.$/,
		);
		// A contractor's is refused before a byte is sent; who may bring models sends it and is refused then.
		const said = (cookie: string) =>
			server.fetch('/api/uploads', {
				method: 'POST',
				cookie,
				headers: {
					'tus-resumable': '1.0.0',
					'upload-length': '100000000',
					'upload-metadata': `filename ${Buffer.from('big.jpg').toString('base64')},siteId ${Buffer.from(siteId).toString('base64')}`,
				},
			});
		const refused = await said(contractor.cookie);
		expect([refused.status, await refused.text()]).toEqual([413, 'big.jpg has 100 MB; at most 30 are taken here. Nothing was kept.\n']);
		const big = new Uint8Array(31_000_000);
		big.set([0xff, 0xd8, 0xff]);
		expect(await refusal('big.jpg', big, surveyor)).toBe('photo-too-large: big.jpg has 31 MB; at most 30 are taken. Nothing was kept.');
		expect((await contractor.api.flag.get({ siteId, flagId })).photos).toEqual([]);
	});
});
