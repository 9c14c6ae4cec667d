import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { checkpointIdMaker, fnv1a64, shortHash } from '#shared/model/checkpoint-id.ts';

/** The definition itself, in BigInt, over the UTF-16LE bytes. */
function fnvByDefinition(text: string): bigint {
	let hash = 0xcbf29ce484222325n;
	for (let at = 0; at < text.length; at++) {
		for (const byte of [text.charCodeAt(at) & 255, text.charCodeAt(at) >>> 8])
			hash = ((hash ^ BigInt(byte)) * 0x100000001b3n) & 0xffffffffffffffffn;
	}
	return hash;
}

describe('checkpoint ids', () => {
	it('hash as FNV-1a of 64 bits is defined', () => {
		fc.assert(
			fc.property(fc.string({ unit: 'binary', maxLength: 40 }), (text) => {
				const [a, b, c, d] = fnv1a64(text);
				expect((BigInt(d) << 48n) | (BigInt(c) << 32n) | (BigInt(b) << 16n) | BigInt(a)).toBe(fnvByDefinition(text));
				expect(shortHash(text)).toBe((fnvByDefinition(text) % 36n ** 10n).toString(36).padStart(10, '0'));
			}),
		);
	});

	const coordinate = fc.integer({ min: -200_000, max: 200_000 }).map((halfMm) => halfMm / 2000);
	const place = fc.tuple(coordinate, coordinate, coordinate);

	it('stay when the element is moved as a whole and rounded anew, and change when the place on it changes', () => {
		fc.assert(
			fc.property(
				place,
				place,
				fc.tuple(fc.double({ min: -1e5, max: 1e5, noNaN: true }), fc.double({ min: -1e5, max: 1e5, noNaN: true })),
				(corner, at, [dx, dy]) => {
					const moved = (p: readonly [number, number, number]): [number, number, number] => [p[0] + dx, p[1] + dy, p[2]];
					const id = checkpointIdMaker()('element', corner, 'face', at, [1, 0, 0]);
					expect(checkpointIdMaker()('element', moved(corner), 'face', moved(at), [1, 0, 0])).toBe(id);
					expect(checkpointIdMaker()('element', corner, 'face', [at[0] + 0.05, at[1], at[2]], [1, 0, 0])).not.toBe(id);
					expect(checkpointIdMaker()('element', corner, 'face', at, [-1, 0, 0])).not.toBe(id);
					expect(checkpointIdMaker()('another', corner, 'face', at, [1, 0, 0])).not.toBe(id);
				},
			),
		);
	});

	it('are told apart where they would be equal', () => {
		const make = checkpointIdMaker();
		const ids = Array.from({ length: 100 }, () => make('element', [0, 0, 0], 'plan', [1, 1, 1], null));
		expect(new Set(ids).size).toBe(100);
	});
});
