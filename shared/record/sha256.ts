import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';
import { canonicalJson } from './canonical-json.ts';

/**
 * SHA-256 (FIPS 180-4) of bytes, in lower-case hexadecimal. Not by the browser's own `crypto.subtle`: that is absent on a page that came by
 * plain http, and a record must be verifiable on an address of the local network too.
 */
export async function sha256Of(bytes: Uint8Array): Promise<string> {
	return bytesToHex(sha256(bytes));
}

/** SHA-256 of a value's canonical text (RFC 8785) in UTF-8. Throws as `canonicalJson` does. */
export async function sha256OfJson(value: unknown): Promise<string> {
	return sha256Of(new TextEncoder().encode(canonicalJson(value)));
}
