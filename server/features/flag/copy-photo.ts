import heicDecode from 'heic-decode';
import sharp from 'sharp';

/** What a photo is by its content, and its copy to be shown; or why it is none. */
export type PhotoCopy =
	| {
			ok: true;
			format: 'jpeg' | 'png' | 'heic';
			widthPx: number;
			heightPx: number;
			/** Without where, when and with what it was taken; turned upright. */
			shown: Uint8Array;
			shownType: 'image/jpeg' | 'image/png';
	  }
	| { ok: false; code: 'not-a-photo' | 'photo-too-large' | 'photo-broken'; message: string };

export const largestPhotoBytes = 30_000_000;
const longestSidePx = 16_000;
const mostPixels = 120_000_000;
/** The copy that is shown: enough to see a crack by. */
const shownSidePx = 2400;

/** JPEG, PNG or HEIC by its first bytes, whatever its name says; null for all else. */
export function photoFormatOf(bytes: Uint8Array): 'jpeg' | 'png' | 'heic' | null {
	const starts = (...wanted: number[]): boolean => wanted.every((byte, index) => bytes[index] === byte);
	if (starts(0xff, 0xd8, 0xff)) return 'jpeg';
	if (starts(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a)) return 'png';
	const text = (from: number): string => String.fromCharCode(...bytes.subarray(from, from + 4));
	return text(4) === 'ftyp' && ['heic', 'heix', 'heim', 'heis', 'mif1', 'msf1'].includes(text(8)) ? 'heic' : null;
}

const notAPhoto: PhotoCopy = {
	ok: false,
	code: 'not-a-photo',
	message: 'This is no JPEG, PNG or HEIC picture, whatever its name says. Nothing was kept.',
};

/** Reads, bounds and copies a photo. Run in a thread: its bytes are a stranger's. */
export async function copyPhoto(bytes: Uint8Array): Promise<PhotoCopy> {
	const format = photoFormatOf(bytes);
	if (format === null) return notAPhoto;
	if (bytes.byteLength > largestPhotoBytes)
		return tooLarge(`It has ${Math.round(bytes.byteLength / 1e6)} MB; at most ${largestPhotoBytes / 1e6} are taken.`);
	const size = format === 'heic' ? heicSize(bytes) : await sizeOf(bytes);
	if (size === null) return notAPhoto;
	const { widthPx, heightPx } = size;
	if (Math.max(widthPx, heightPx) > longestSidePx || widthPx * heightPx > mostPixels)
		return tooLarge(
			`It is ${widthPx} × ${heightPx} pixels; at most ${longestSidePx} on a side and ${mostPixels / 1e6} million in all are taken.`,
		);
	try {
		// A HEIC may be coded larger than it is and cut to its size (`clap`): the decoder tells the size it has.
		const heic = format === 'heic' ? await decoded(bytes) : null;
		const source = heic?.source ?? sharp(bytes, { limitInputPixels: mostPixels, failOn: 'error' }).rotate();
		const fitted = source.resize(shownSidePx, shownSidePx, { fit: 'inside', withoutEnlargement: true });
		const shown = format === 'png' ? await fitted.png().toBuffer() : await fitted.jpeg({ quality: 84 }).toBuffer();
		return {
			ok: true,
			format,
			widthPx: heic?.widthPx ?? widthPx,
			heightPx: heic?.heightPx ?? heightPx,
			shown,
			shownType: format === 'png' ? 'image/png' : 'image/jpeg',
		};
	} catch {
		return { ok: false, code: 'photo-broken', message: 'This picture begins like one but cannot be read to its end. Nothing was kept.' };
	}
}

function tooLarge(why: string): PhotoCopy {
	return { ok: false, code: 'photo-too-large', message: `This picture is too large. ${why} Nothing was kept.` };
}

async function sizeOf(bytes: Uint8Array): Promise<{ widthPx: number; heightPx: number } | null> {
	const { width, height } = await sharp(bytes, { limitInputPixels: false })
		.metadata()
		.catch(() => ({ width: 0, height: 0 }));
	return width > 0 && height > 0 ? { widthPx: width, heightPx: height } : null;
}

/** The largest image of the file, from its `ispe` boxes (ISO/IEC 23008-12, 6.5.3): read before anything is decoded. */
function heicSize(bytes: Uint8Array): { widthPx: number; heightPx: number } | null {
	const view = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	let largest: { widthPx: number; heightPx: number } | null = null;
	for (let at = view.indexOf('ispe'); at >= 0 && at + 16 <= view.length; at = view.indexOf('ispe', at + 4)) {
		const [widthPx, heightPx] = [view.readUInt32BE(at + 8), view.readUInt32BE(at + 12)];
		if (widthPx > 0 && heightPx > 0 && widthPx * heightPx > (largest === null ? 0 : largest.widthPx * largest.heightPx))
			largest = { widthPx, heightPx };
	}
	return largest;
}

async function decoded(bytes: Uint8Array) {
	const { data, width, height } = await heicDecode({ buffer: Buffer.from(bytes) });
	const source = sharp(Buffer.from(data.buffer, data.byteOffset, data.byteLength), { raw: { width, height, channels: 4 } }).removeAlpha();
	return { source, widthPx: width, heightPx: height };
}
