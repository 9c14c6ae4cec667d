import { sha256Of } from './sha256.ts';

/** An Ed25519 public key that somebody chose to trust. */
export interface TrustedKey {
	/** The point, 32 bytes. */
	readonly point: Uint8Array<ArrayBuffer>;
	/** SHA-256 of its SubjectPublicKeyInfo (DER). */
	readonly sha256: string;
}

/** SubjectPublicKeyInfo of Ed25519 before its 32 bytes (RFC 8410, 4). */
const spkiHead = Uint8Array.of(0x30, 0x2a, 0x30, 0x05, 0x06, 0x03, 0x2b, 0x65, 0x70, 0x03, 0x21, 0x00);
const block = /-----BEGIN PUBLIC KEY-----([A-Za-z0-9+/=\s]*)-----END PUBLIC KEY-----/g;

/**
 * Every Ed25519 public key of a PEM file (RFC 7468, RFC 8410). Throws a sentence where there is none, or one of another kind:
 * a key that was meant and cannot be read must not silently count for nothing.
 */
export async function readPublicKeys(pem: string): Promise<TrustedKey[]> {
	const blocks = [...pem.matchAll(block)].map((match) => (match[1] ?? '').replaceAll(/\s/g, ''));
	if (blocks.length === 0) throw new Error('There is no public key in this file: it must hold a block "BEGIN PUBLIC KEY".');
	return Promise.all(
		blocks.map(async (base64) => {
			const der = bytesOf(base64);
			if (der === null || der.length !== spkiHead.length + 32 || spkiHead.some((byte, index) => der[index] !== byte))
				throw new Error('A key in this file is no Ed25519 public key.');
			return { point: der.slice(spkiHead.length), sha256: await sha256Of(der) };
		}),
	);
}

/** The SubjectPublicKeyInfo of a point as PEM. */
export function publicKeyPem(point: Uint8Array): string {
	const der = Uint8Array.from([...spkiHead, ...point]);
	return `-----BEGIN PUBLIC KEY-----\n${btoa(String.fromCharCode(...der))}\n-----END PUBLIC KEY-----\n`;
}

function bytesOf(base64: string): Uint8Array<ArrayBuffer> | null {
	try {
		return Uint8Array.from(atob(base64), (letter) => letter.charCodeAt(0));
	} catch {
		return null;
	}
}

/** Bytes as lower-case hexadecimal. */
export function hexOf(bytes: Uint8Array): string {
	return Array.from(bytes, (byte) => byte.toString(16).padStart(2, '0')).join('');
}

/** What lower-case hexadecimal stands for. */
export function bytesOfHex(hex: string): Uint8Array<ArrayBuffer> {
	return Uint8Array.from({ length: hex.length / 2 }, (_, index) => Number.parseInt(hex.slice(2 * index, 2 * index + 2), 16));
}
