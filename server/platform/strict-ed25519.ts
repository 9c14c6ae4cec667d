import { ed25519 } from '@noble/curves/ed25519.js';
import type { StrictEd25519 } from '#shared/record/verify-records.ts';

/** RFC 8032 without the cofactor's leniency towards keys: node's own verification (OpenSSL) takes points of small order. */
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
