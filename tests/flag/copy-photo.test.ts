import { mkdtempSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { copyPhoto, photoFormatOf } from '../../server/features/flag/copy-photo.ts';
import { diskFiles } from '../../server/platform/disk-files.ts';
import { photoAddresses } from '../../server/platform/photo-addresses.ts';
import { photoStoreOf } from '../../server/platform/photo-store.ts';

const grey = (width: number, height: number) => sharp({ create: { width, height, channels: 3, background: { r: 90, g: 90, b: 90 } } });

describe('a photo', () => {
	it('is shown upright and without its place, the original untouched', async () => {
		const exif = { IFD0: { Make: 'Secret', Orientation: '6' }, IFD3: { GPSLatitudeRef: 'N', GPSLatitude: '51/1 30/1 0/1' } };
		const original = await grey(300, 200).withExif(exif).withMetadata({ orientation: 6 }).jpeg().toBuffer();
		expect((await sharp(original).metadata()).exif).toBeDefined();
		const copy = await copyPhoto(original);
		if (!copy.ok) throw new Error(copy.message);
		expect(copy).toMatchObject({ format: 'jpeg', widthPx: 300, heightPx: 200, shownType: 'image/jpeg' });
		const shown = await sharp(copy.shown).metadata();
		expect([shown.exif, shown.xmp, shown.iptc, shown.width, shown.height]).toEqual([undefined, undefined, undefined, 200, 300]);
	});

	it('may be a PNG, and is fitted where it is larger than can be looked at', async () => {
		const copy = await copyPhoto(await grey(4000, 1000).png().toBuffer());
		if (!copy.ok) throw new Error(copy.message);
		expect(copy).toMatchObject({ format: 'png', shownType: 'image/png' });
		expect((await sharp(copy.shown).metadata()).width).toBe(2400);
	});

	it('that is none, is cut off, or is 50 000 pixels wide is refused in a sentence', async () => {
		const refused = async (bytes: Uint8Array) => {
			const copy = await copyPhoto(bytes);
			return copy.ok ? 'taken' : `${copy.code}: ${copy.message}`;
		};
		expect(await refused(new TextEncoder().encode('<svg onload="alert(1)"/>'))).toMatch(/^not-a-photo: This is no JPEG/);
		expect(await refused(new Uint8Array())).toMatch(/^not-a-photo/);
		expect(await refused(Uint8Array.from([0xff, 0xd8, 0xff, 0xe0, 1, 2, 3]))).toMatch(/^not-a-photo/);
		const whole = await sharp(Buffer.from(Array.from({ length: 300 * 300 * 3 }, (_, index) => (index * 7919) % 251)), {
			raw: { width: 300, height: 300, channels: 3 },
		})
			.jpeg()
			.toBuffer();
		expect(await refused(whole.subarray(0, whole.length / 2))).toMatch(/^photo-broken/);
		expect(await refused(await grey(50_000, 3).png().toBuffer())).toMatch(/^photo-too-large: .*50000 × 3 pixels/);
		const heic = new Uint8Array(200);
		heic.set(new TextEncoder().encode('ftypheic'), 4);
		expect(await refused(heic)).toMatch(/^not-a-photo/);
		heic.set(new TextEncoder().encode('ispe'), 60);
		new DataView(heic.buffer).setUint32(68, 50_000);
		new DataView(heic.buffer).setUint32(72, 50_000);
		expect(photoFormatOf(heic)).toBe('heic');
		expect(await refused(heic)).toMatch(/^photo-too-large: .*50000 × 50000/);
		expect(await refused(Buffer.concat([whole, Buffer.alloc(30_000_000)]))).toMatch(/^photo-too-large: .*30 MB/);
	});
});

describe('an address of a photo', () => {
	const key = Buffer.alloc(32, 7);
	const photo = { sha256: 'a'.repeat(64), type: 'image/png' as const };
	const at = (ms: number) => photoAddresses(() => new Date(ms), key);
	const token = at(0).of(photo).split('/').at(-1)!;

	it('shows what it was made for, for minutes, and nothing once it is altered or over', () => {
		expect(at(1000).read(token)).toEqual(photo);
		expect(at(601_000).read(token)).toBeNull();
		expect(photoAddresses(() => new Date(0)).read(token)).toBeNull();
		for (const altered of [token.replace(/^a/, 'b'), token.replace('png', 'jpeg'), `${token}x`, '', '...', `${token}.`])
			expect(at(1000).read(altered)).toBeNull();
	});
});

describe('photos are kept', () => {
	let folder: string;
	let stop = async (): Promise<void> => {};
	let endpoint: string;
	beforeAll(async () => {
		folder = mkdtempSync(join(tmpdir(), 'bb-photos-'));
		const S3rver = createRequire(import.meta.url)('s3rver');
		const fake = new S3rver({
			port: 0,
			address: '127.0.0.1',
			silent: true,
			directory: folder,
			configureBuckets: [{ name: 'site-photos' }],
		});
		const { port } = await fake.run();
		endpoint = `http://127.0.0.1:${port}`;
		stop = () => fake.close();
		process.env.AWS_ACCESS_KEY_ID = 'S3RVER';
		process.env.AWS_SECRET_ACCESS_KEY = 'S3RVER';
	});
	afterAll(async () => {
		await stop();
		rmSync(folder, { recursive: true, force: true });
	});

	it.each(['disk', 's3'] as const)('by their hash, the same bytes once, on %s', async (kind) => {
		const store = photoStoreOf(kind === 'disk' ? { kind } : { kind, bucket: 'site-photos', endpoint }, diskFiles(join(folder, 'files')));
		const bytes = new Uint8Array(await grey(20, 20).jpeg().toBuffer());
		const kept = await store.keep(bytes);
		expect(kept).toEqual(await store.keep(bytes));
		expect(kept).toMatchObject({ bytes: bytes.byteLength, sha256: expect.stringMatching(/^[0-9a-f]{64}$/) });
		expect(new Uint8Array(await store.read(kept.sha256))).toEqual(bytes);
		await expect(store.read('0'.repeat(64))).rejects.toThrow();
	});
});
