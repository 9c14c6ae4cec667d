import type { Vector3 } from '../geometry/frame.ts';

/** Places in cubes, so that those about a point are found without looking at all. Metres. */
export interface PlaceGrid {
	/** Calls back the index of every place that may lie within the cell size of the point; some lie further. Each once. */
	forEachNear(point: Vector3, visit: (index: number) => void): void;
}

/** Builds the grid. Places that are no finite numbers are left out. */
export function placeGrid(places: readonly Vector3[], cellM: number): PlaceGrid {
	const low = [Infinity, Infinity, Infinity];
	const high = [-Infinity, -Infinity, -Infinity];
	const finite = places.map((place) => place.every(Number.isFinite));
	places.forEach((place, index) => {
		if (!finite[index]) return;
		for (let axis = 0; axis < 3; axis++) {
			low[axis] = Math.min(low[axis]!, place[axis]!);
			high[axis] = Math.max(high[axis]!, place[axis]!);
		}
	});
	const cellOf = (point: Vector3, axis: number): number => Math.floor((point[axis]! - low[axis]!) / cellM) + 1;
	const counts = [0, 1, 2].map((axis) => Math.floor((high[axis]! - low[axis]!) / cellM) + 3);
	// Beyond 2⁵³ cells neighbours may share a key: more candidates, never fewer.
	const key = (x: number, y: number, z: number): number => (x * counts[1]! + y) * counts[2]! + z;
	const cells = new Map<number, number[]>();
	places.forEach((place, index) => {
		if (!finite[index]) return;
		const at = key(cellOf(place, 0), cellOf(place, 1), cellOf(place, 2));
		const cell = cells.get(at);
		if (cell) cell.push(index);
		else cells.set(at, [index]);
	});
	const seenBy = new Int32Array(places.length);
	let visitNumber = 0;
	return {
		forEachNear(point, visit) {
			const x = cellOf(point, 0);
			const y = cellOf(point, 1);
			const z = cellOf(point, 2);
			if (!(x >= 0 && x < counts[0]! && y >= 0 && y < counts[1]! && z >= 0 && z < counts[2]!)) return;
			visitNumber++;
			for (let i = x - 1; i <= x + 1; i++) {
				for (let j = y - 1; j <= y + 1; j++) {
					for (let k = z - 1; k <= z + 1; k++) {
						for (const index of cells.get(key(i, j, k)) ?? []) {
							if (seenBy[index] === visitNumber) continue;
							seenBy[index] = visitNumber;
							visit(index);
						}
					}
				}
			}
		},
	};
}
