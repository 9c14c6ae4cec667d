import { createHmac, randomBytes, timingSafeEqual } from 'node:crypto';

/** What an address of a photo stands for. */
export interface AddressedPhoto {
	sha256: string;
	type: 'image/jpeg' | 'image/png';
}

export interface PhotoAddresses {
	/** A path on this server that shows the photo for ten minutes, to whoever has it. */
	of: (photo: AddressedPhoto) => string;
	/** What it stands for; null where it is over, altered, or another server's. */
	read: (token: string) => AddressedPhoto | null;
}

export const photoPath = '/api/photos';
const lifeMs = 600_000;

/** Addresses are signed with a key that lives as long as the process: after a new start pages ask for new ones. */
export function photoAddresses(now: () => Date, key: Buffer = randomBytes(32)): PhotoAddresses {
	const signed = (text: string): Buffer => createHmac('sha256', key).update(text).digest();
	return {
		of: ({ sha256, type }) => {
			// Held to the half of its life, so that a page that asks again keeps its picture in the browser's cache.
			const until = (Math.floor(now().getTime() / (lifeMs / 2)) + 2) * (lifeMs / 2);
			const text = `${sha256}.${type === 'image/png' ? 'png' : 'jpeg'}.${until.toString(36)}`;
			return `${photoPath}/${text}.${signed(text).toString('base64url')}`;
		},
		read: (token) => {
			const parts = token.split('.');
			const [sha256 = '', kind = '', until = '', signature = ''] = parts;
			const given = Buffer.from(signature, 'base64url');
			const wanted = signed(`${sha256}.${kind}.${until}`);
			if (parts.length !== 4 || given.length !== wanted.length || !timingSafeEqual(given, wanted)) return null;
			if (Number.parseInt(until, 36) < now().getTime()) return null;
			return { sha256, type: kind === 'png' ? 'image/png' : 'image/jpeg' };
		},
	};
}
