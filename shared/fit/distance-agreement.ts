/**
 * Which pairs can belong to one fit at all: pairs within a tolerance of the same pose have distances to one another that differ by no more than
 * twice the tolerance between the sides, however the instrument stands. One bit for each two pairs.
 */
export interface DistanceAgreement {
	readonly count: number;
	/** 32-bit words a row. */
	readonly words: number;
	/** count rows: bit j of row i is set where i and j agree; not of i itself. */
	readonly bits: Int32Array;
}

/** Whether the distance i–j is the same on both sides to within 2·toleranceM; at the edge rather true than false. */
export function distancesAgree(survey: Float64Array, control: Float64Array, i: number, j: number, toleranceM: number): boolean {
	const p = 3 * i;
	const q = 3 * j;
	const x = survey[p]! - survey[q]!;
	const y = survey[p + 1]! - survey[q + 1]!;
	const z = survey[p + 2]! - survey[q + 2]!;
	const e = control[p]! - control[q]!;
	const n = control[p + 1]! - control[q + 1]!;
	const h = control[p + 2]! - control[q + 2]!;
	const a = x * x + y * y + z * z;
	const b = e * e + n * n + h * h;
	// |√a − √b| = |a − b|/(√a + √b), and (√a + √b)² ≤ 2·(a + b), nearly equal where it matters: no root.
	const reach = 2 * toleranceM;
	return (a - b) * (a - b) <= 2 * reach * reach * (a + b);
}

export function distanceAgreement(survey: Float64Array, control: Float64Array, count: number, toleranceM: number): DistanceAgreement {
	const words = (count + 31) >>> 5;
	const bits = new Int32Array(count * words);
	for (let i = 1; i < count; i++) {
		for (let j = 0; j < i; j++) {
			if (!distancesAgree(survey, control, i, j, toleranceM)) continue;
			bits[i * words + (j >>> 5)]! |= 1 << (j & 31);
			bits[j * words + (i >>> 5)]! |= 1 << (i & 31);
		}
	}
	return { count, words, bits };
}

export function agree({ words, bits }: DistanceAgreement, i: number, j: number): boolean {
	return ((bits[i * words + (j >>> 5)]! >>> (j & 31)) & 1) === 1;
}

/** How many pairs agree with all three, the three themselves counted: no fit through them can have more. */
export function mostAround({ words, bits }: DistanceAgreement, i: number, j: number, k: number): number {
	let total = 3;
	for (let word = 0; word < words; word++) {
		let common = bits[i * words + word]! & bits[j * words + word]! & bits[k * words + word]!;
		// Bits by halves, quarters, bytes (Warren 2012, Hacker's Delight, 5-1).
		common -= (common >>> 1) & 0x55555555;
		common = (common & 0x33333333) + ((common >>> 2) & 0x33333333);
		total += Math.imul((common + (common >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
	}
	return total;
}
