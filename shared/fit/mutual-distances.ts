import type { Vector3 } from '#shared/geometry/frame.ts';

/** Distances between the points of one list: what stays the same however the instrument stands. */

/** All distances, count × count, row by row, metres. */
export function distanceTable(points: readonly { point: Vector3 }[]): Float64Array {
	const count = points.length;
	const table = new Float64Array(count * count);
	for (let i = 0; i < count; i++) {
		const a = points[i]!.point;
		for (let j = 0; j < i; j++) {
			const b = points[j]!.point;
			const x = a[0] - b[0];
			const y = a[1] - b[1];
			const z = a[2] - b[2];
			table[i * count + j] = table[j * count + i] = Math.sqrt(x * x + y * y + z * z);
		}
	}
	return table;
}

/** Pairs by length, in cells of a given width: found by counting, without a sort. */
export interface PairsByLength {
	/** i·count + j, i > j, cell by cell. */
	readonly codes: Int32Array;
	/** Where each cell ends in `codes`. */
	readonly ends: Int32Array;
	readonly widthM: number;
	readonly count: number;
}

/** More cells than a quarter of the pairs would cost more to make than they save. */
const PAIRS_A_CELL = 4;

/**
 * @param table of distanceTable
 * @param widthM of a cell, metres; wider where the longest pair would need too many
 */
export function pairsByLength(table: Float64Array, count: number, widthM: number): PairsByLength {
	let longest = 0;
	for (let at = 0; at < table.length; at++) if (table[at]! > longest) longest = table[at]!;
	const pairs = (count * (count - 1)) / 2;
	const width = Math.max(widthM, (PAIRS_A_CELL * longest) / (pairs + 1), Number.MIN_VALUE);
	const ends = new Int32Array(Math.floor(longest / width) + 1);
	for (let i = 0; i < count; i++) for (let j = 0; j < i; j++) ends[Math.floor(table[i * count + j]! / width)]!++;
	for (let cell = 1; cell < ends.length; cell++) ends[cell]! += ends[cell - 1]!;
	const codes = new Int32Array(pairs);
	const next = ends.slice();
	for (let i = 0; i < count; i++) {
		for (let j = 0; j < i; j++) {
			const code = i * count + j;
			codes[--next[Math.floor(table[code]! / width)]!] = code;
		}
	}
	return { codes, ends, widthM: width, count };
}

/** The codes i·count + j of the pairs whose length is within `slack` of `length`. */
export function pairsOfLength({ codes, ends, widthM }: PairsByLength, table: Float64Array, length: number, slack: number): number[] {
	const found: number[] = [];
	const first = Math.max(0, Math.floor((length - slack) / widthM));
	const last = Math.min(ends.length - 1, Math.floor((length + slack) / widthM));
	if (first > last) return found;
	for (let at = first === 0 ? 0 : ends[first - 1]!; at < ends[last]!; at++) {
		if (Math.abs(table[codes[at]!]! - length) <= slack) found.push(codes[at]!);
	}
	return found;
}

/** Each place with the nearest of `points` within `reach`, one to one, nearest first served: [place, point, distance], by place. */
export function nearestWithin(
	places: readonly Vector3[],
	points: readonly { point: Vector3 }[],
	reach: number,
): [number, number, number][] {
	const candidates: [number, number, number][] = [];
	for (let i = 0; i < places.length; i++) {
		const [e, n, h] = places[i]!;
		for (let j = 0; j < points.length; j++) {
			const { point } = points[j]!;
			const x = e - point[0];
			if (x > reach || x < -reach) continue;
			const y = n - point[1];
			const z = h - point[2];
			const square = x * x + y * y + z * z;
			if (square <= reach * reach) candidates.push([i, j, Math.sqrt(square)]);
		}
	}
	candidates.sort((a, b) => a[2] - b[2]);
	const usedPlaces = new Set<number>();
	const usedPoints = new Set<number>();
	const kept = candidates.filter(([i, j]) => {
		if (usedPlaces.has(i) || usedPoints.has(j)) return false;
		usedPlaces.add(i);
		usedPoints.add(j);
		return true;
	});
	return kept.sort((a, b) => a[0] - b[0]);
}
