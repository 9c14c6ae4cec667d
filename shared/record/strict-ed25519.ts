import { ed25519 } from '@noble/curves/ed25519.js';

/** Ed25519 verification as RFC 8032 has it, strictly: S ≥ L, points not in their one encoding, and keys of small order are refused. */
export interface StrictEd25519 {
	/** Why this point may not be a key, as a sentence; null where it may. */
	whyNoKey: (point: Uint8Array) => string | null;
	isSigned: (signed: { point: Uint8Array; message: Uint8Array; signature: Uint8Array }) => boolean;
}

/** The same in every browser and on the server: Node's own verification (OpenSSL) and WebCrypto take keys of small order. */
export const strictEd25519: StrictEd25519 = {
	whyNoKey: (bytes) => {
		try {
			const point = ed25519.Point.fromBytes(bytes, false);
			return point.isTorsionFree() && !point.is0() ? null : 'it lies in a subgroup of small order, where anybody can make signatures.';
		} catch {
			return 'it is no point of the curve in its one encoding.';
		}
	},
	isSigned: ({ point, message, signature }) => ed25519.verify(signature, message, point, { zip215: false }),
};
