import { canonicalJson } from './canonical-json.ts';

/** SHA-256 (FIPS 180-4) of bytes, in lower-case hexadecimal. */
export async function sha256Of(bytes: Uint8Array<ArrayBuffer>): Promise<string> {
	const digest = new Uint8Array(await crypto.subtle.digest('SHA-256', bytes));
	return Array.from(digest, (byte) => byte.toString(16).padStart(2, '0')).join('');
}

/** SHA-256 of a value's canonical text (RFC 8785) in UTF-8. Throws as `canonicalJson` does. */
export function sha256OfJson(value: unknown): Promise<string> {
	return sha256Of(new TextEncoder().encode(canonicalJson(value)));
}
