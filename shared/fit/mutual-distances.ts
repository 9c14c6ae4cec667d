import type { Vector3 } from '#shared/geometry/frame.ts';

/** Distances between the points of one list: what stays the same however the instrument stands. */

/** All distances, count × count, row by row, metres. */
export function distanceTable(points: readonly { point: Vector3 }[]): Float64Array {
	const count = points.length;
	const table = new Float64Array(count * count);
	for (let i = 0; i < count; i++) {
		for (let j = 0; j < i; j++) {
			const [a, b] = [points[i]!.point, points[j]!.point];
			table[i * count + j] = table[j * count + i] = Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
		}
	}
	return table;
}

/** Pairs by length, shortest first. */
export interface SortedPairs {
	lengths: Float64Array;
	/** i·count + j, i > j. */
	codes: Uint32Array;
	count: number;
}

export function sortedPairs(table: Float64Array, count: number): SortedPairs {
	const size = (count * (count - 1)) / 2;
	const codes = new Uint32Array(size);
	let at = 0;
	for (let i = 0; i < count; i++) for (let j = 0; j < i; j++) codes[at++] = i * count + j;
	codes.sort((a, b) => table[a]! - table[b]!);
	return { lengths: Float64Array.from(codes, (code) => table[code]!), codes, count };
}

/** The pairs whose length is within `slack` of `length`. */
export function pairsOfLength({ lengths, codes, count }: SortedPairs, length: number, slack: number): [number, number][] {
	let low = 0;
	let high = lengths.length;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (lengths[middle]! < length - slack) low = middle + 1;
		else high = middle;
	}
	const found: [number, number][] = [];
	for (; low < lengths.length && lengths[low]! <= length + slack; low++) found.push([Math.floor(codes[low]! / count), codes[low]! % count]);
	return found;
}

/** Each place with the nearest of `points` within `reach`, one to one, nearest first served: [place, point, distance], by place. */
export function nearestWithin(
	places: readonly Vector3[],
	points: readonly { point: Vector3 }[],
	reach: number,
): [number, number, number][] {
	const candidates: [number, number, number][] = [];
	places.forEach((place, i) => {
		points.forEach(({ point }, j) => {
			const x = place[0] - point[0];
			const y = place[1] - point[1];
			const z = place[2] - point[2];
			const square = x * x + y * y + z * z;
			if (square <= reach * reach) candidates.push([i, j, Math.sqrt(square)]);
		});
	});
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
