import type { Vector3 } from '../geometry/frame.ts';

/** Short names for checkpoints that the same file, and an unchanged element in a later revision, gives again. */

/**
 * FNV-1a, 64 bit (Fowler, Noll, Vo), of the UTF-16 units of a text, each as two bytes. In four 16-bit limbs: no BigInt, the same everywhere.
 * Returned as the limbs, lowest first.
 */
export function fnv1a64(text: string): readonly [number, number, number, number] {
	// Offset basis cbf29ce484222325, prime 100000001b3.
	let [a, b, c, d] = [0x2325, 0x8422, 0x9ce4, 0xcbf2];
	const step = (byte: number): void => {
		a ^= byte;
		// Times 2^40 + 0x1b3: the high part of the prime moves the value up by two limbs and a half.
		const a1 = a * 0x1b3;
		const b1 = b * 0x1b3 + (a1 >>> 16);
		const c1 = c * 0x1b3 + (a << 8) + (b1 >>> 16);
		const d1 = d * 0x1b3 + (b << 8) + Math.floor(c1 / 65536);
		a = a1 & 0xffff;
		b = b1 & 0xffff;
		c = c1 & 0xffff;
		d = d1 & 0xffff;
	};
	for (let i = 0; i < text.length; i++) {
		const unit = text.charCodeAt(i);
		step(unit & 255);
		step(unit >>> 8);
	}
	return [a, b, c, d];
}

const ID_LENGTH = 10;
const LIMIT = 36 ** ID_LENGTH;

/** A text's hash as ten letters and digits (51.7 of FNV-1a's 64 bits). */
export function shortHash(text: string): string {
	const [a, b, c, d] = fnv1a64(text);
	const low = b * 65536 + a;
	const high = d * 65536 + c;
	// (high · 2^32 + low) mod 36^10 without leaving the exact integers: high's 32 bits in two steps of 16.
	const twice = (value: number): number => (value * 2) % LIMIT;
	let rest = high % LIMIT;
	for (let i = 0; i < 32; i++) rest = twice(rest);
	return ((rest + low) % LIMIT).toString(36).padStart(ID_LENGTH, '0');
}

/** Cell of 10 mm, its borders where no round dimension (mm, 1/16 inch) falls, so that the last digit does not move a place across. */
const cellOf = (lengthM: number): number => Math.floor((lengthM + 0.0031937) / 0.01);

/**
 * Makes ids: from the element's GlobalId (or what stands for it), the characteristic, the place relative to the element's corner in cells of
 * 10 mm, and for a face the way it looks. Two that come out the same (in one element or by chance) are told apart in the order given.
 */
export function checkpointIdMaker(): (
	element: string,
	cornerM: Vector3,
	characteristic: string,
	placeM: Vector3,
	direction: Vector3 | null,
) => string {
	const given = new Set<string>();
	return (element, corner, characteristic, place, direction) => {
		const cells = [0, 1, 2].map((k) => cellOf(place[k]! - corner[k]!)).join(',');
		const way = direction ? direction.map((part) => Math.round(part * 4 + 0.031)).join(',') : '';
		const text = `${element}|${characteristic}|${cells}|${way}`;
		let id = shortHash(text);
		for (let again = 2; given.has(id); again++) id = shortHash(`${text}|${again}`);
		given.add(id);
		return id;
	};
}
