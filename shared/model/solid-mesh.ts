import type { Vector3 } from '../geometry/frame.ts';

/**
 * An element's body as a welded triangle mesh in doubles. Coordinates are metres less `originM` (design frame), so that areas and volumes
 * keep their digits at map-size coordinates.
 */
export type SolidMesh = {
	originM: Vector3;
	/** x, y, z of each vertex, less the origin. */
	xyzM: Float64Array;
	/** Three vertex numbers a triangle. Closed bodies wind outward. */
	triangles: Uint32Array;
	/** The connected body each triangle belongs to. */
	bodyOf: Uint32Array;
	bodies: readonly MeshBody[];
	/** Relative to the origin. */
	min: Vector3;
	max: Vector3;
};

export type MeshBody = {
	triangleCount: number;
	areaM2: number;
	/** Encloses a volume (its vector area is nothing): then the winding is proven. */
	isClosed: boolean;
	/** ≥ 0 for a closed body, 0 else. */
	volumeM3: number;
	min: Vector3;
	max: Vector3;
};

const WELD_M = 0.00002;
const SLIVER_M2 = 1e-10;

/** Gives each vertex the number of the first one within the weld distance (own hash grid; linear). */
function weld(xyz: Float64Array): { kept: Float64Array; newNumber: Uint32Array } {
	const count = xyz.length / 3;
	const cell = WELD_M * 4;
	const heads = new Map<number, number>();
	const next = new Int32Array(count).fill(-1);
	const kept = new Float64Array(xyz.length);
	const newNumber = new Uint32Array(count);
	let keptCount = 0;
	const key = (i: number, j: number, k: number): number => (Math.imul(i, 73856093) ^ Math.imul(j, 19349663) ^ Math.imul(k, 83492791)) >>> 0;
	const lookIn = (i: number, j: number, k: number, x: number, y: number, z: number): number => {
		for (let at = heads.get(key(i, j, k)) ?? -1; at >= 0; at = next[at]!) {
			const dx = kept[at * 3]! - x;
			const dy = kept[at * 3 + 1]! - y;
			const dz = kept[at * 3 + 2]! - z;
			if (dx * dx + dy * dy + dz * dz <= WELD_M * WELD_M) return at;
		}
		return -1;
	};
	for (let v = 0; v < count; v++) {
		const x = xyz[v * 3]!;
		const y = xyz[v * 3 + 1]!;
		const z = xyz[v * 3 + 2]!;
		const fi = x / cell;
		const fj = y / cell;
		const fk = z / cell;
		const i = Math.floor(fi);
		const j = Math.floor(fj);
		const k = Math.floor(fk);
		let found = lookIn(i, j, k, x, y, z);
		if (found < 0) {
			// A neighbour cell only where the vertex is within the weld distance of it (a quarter of the cell).
			const near = (f: number, whole: number): number => (f - whole < 0.25 ? -1 : f - whole > 0.75 ? 1 : 0);
			const di = near(fi, i);
			const dj = near(fj, j);
			const dk = near(fk, k);
			for (let mask = 1; mask < 8 && found < 0; mask++) {
				if ((mask & 1 && di === 0) || (mask & 2 && dj === 0) || (mask & 4 && dk === 0)) continue;
				found = lookIn(i + (mask & 1 ? di : 0), j + (mask & 2 ? dj : 0), k + (mask & 4 ? dk : 0), x, y, z);
			}
		}
		if (found < 0) {
			found = keptCount++;
			kept[found * 3] = x;
			kept[found * 3 + 1] = y;
			kept[found * 3 + 2] = z;
			const at = key(i, j, k);
			next[found] = heads.get(at) ?? -1;
			heads.set(at, found);
		}
		newNumber[v] = found;
	}
	return { kept: kept.slice(0, keptCount * 3), newNumber };
}

function boxOf(xyz: Float64Array, vertices: Iterable<number>): { min: Vector3; max: Vector3 } {
	let [x0, y0, z0, x1, y1, z1] = [Infinity, Infinity, Infinity, -Infinity, -Infinity, -Infinity];
	for (const v of vertices) {
		const x = xyz[v * 3]!;
		const y = xyz[v * 3 + 1]!;
		const z = xyz[v * 3 + 2]!;
		if (x < x0) x0 = x;
		if (x > x1) x1 = x;
		if (y < y0) y0 = y;
		if (y > y1) y1 = y;
		if (z < z0) z0 = z;
		if (z > z1) z1 = z;
	}
	return { min: [x0, y0, z0], max: [x1, y1, z1] };
}

/** Twice the vector area of a triangle. */
export function doubleAreaVector(xyz: Float64Array, a: number, b: number, c: number): Vector3 {
	const ux = xyz[b * 3]! - xyz[a * 3]!;
	const uy = xyz[b * 3 + 1]! - xyz[a * 3 + 1]!;
	const uz = xyz[b * 3 + 2]! - xyz[a * 3 + 2]!;
	const vx = xyz[c * 3]! - xyz[a * 3]!;
	const vy = xyz[c * 3 + 1]! - xyz[a * 3 + 1]!;
	const vz = xyz[c * 3 + 2]! - xyz[a * 3 + 2]!;
	return [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
}

/** Union–find roots of the vertices joined by triangles. */
function connect(vertexCount: number, triangles: readonly number[]): Uint32Array {
	const parent = new Uint32Array(vertexCount);
	for (let v = 0; v < vertexCount; v++) parent[v] = v;
	const root = (v: number): number => {
		let at = v;
		while (parent[at]! !== at) {
			parent[at] = parent[parent[at]!]!;
			at = parent[at]!;
		}
		return at;
	};
	for (let t = 0; t < triangles.length; t += 3) {
		const a = root(triangles[t]!);
		parent[root(triangles[t + 1]!)] = a;
		parent[root(triangles[t + 2]!)] = root(a);
	}
	for (let v = 0; v < vertexCount; v++) parent[v] = root(v);
	return parent;
}

const isInside = (inner: MeshBody, outer: MeshBody): boolean =>
	[0, 1, 2].every((k) => inner.min[k]! > outer.min[k]! - WELD_M && inner.max[k]! < outer.max[k]! + WELD_M);

/**
 * Welds raw triangles (absolute coordinates in metres, design frame) and turns every closed body so that its faces look outward
 * (signed volume; a negative one inside another body is a void and stays). Null where no triangle with an area is left.
 */
export function weldMesh(rawXyzM: Float64Array, rawTriangles: Uint32Array): SolidMesh | null {
	if (rawTriangles.length === 0) return null;
	const first = rawTriangles[0]!;
	const originM: Vector3 = [rawXyzM[first * 3]!, rawXyzM[first * 3 + 1]!, rawXyzM[first * 3 + 2]!];
	const shifted = new Float64Array(rawXyzM.length);
	for (let i = 0; i < rawXyzM.length; i++) shifted[i] = rawXyzM[i]! - originM[i % 3]!;
	const { kept: xyzM, newNumber } = weld(shifted);
	const triangles: number[] = [];
	const doubleAreas: Vector3[] = [];
	for (let t = 0; t + 2 < rawTriangles.length; t += 3) {
		const a = newNumber[rawTriangles[t]!]!;
		const b = newNumber[rawTriangles[t + 1]!]!;
		const c = newNumber[rawTriangles[t + 2]!]!;
		if (a === b || b === c || c === a) continue;
		const area = doubleAreaVector(xyzM, a, b, c);
		if (Math.hypot(...area) < 2 * SLIVER_M2) continue;
		triangles.push(a, b, c);
		doubleAreas.push(area);
	}
	if (triangles.length === 0) return null;

	const roots = connect(xyzM.length / 3, triangles);
	const bodyNumbers = new Map<number, number>();
	const bodyOf = new Uint32Array(triangles.length / 3);
	const sums: { area: number; vector: [number, number, number]; volume: number; count: number; vertices: Set<number>; from: number }[] = [];
	for (let t = 0; t < bodyOf.length; t++) {
		const [a, b, c] = [triangles[t * 3]!, triangles[t * 3 + 1]!, triangles[t * 3 + 2]!];
		let body = bodyNumbers.get(roots[a]!);
		if (body === undefined) {
			body = sums.length;
			bodyNumbers.set(roots[a]!, body);
			sums.push({ area: 0, vector: [0, 0, 0], volume: 0, count: 0, vertices: new Set(), from: a });
		}
		bodyOf[t] = body;
		const sum = sums[body]!;
		const d = doubleAreas[t]!;
		sum.area += Math.hypot(...d) / 2;
		for (let k = 0; k < 3; k++) sum.vector[k]! += d[k]! / 2;
		// Volume of the tetrahedron with the body's first vertex.
		sum.volume +=
			((xyzM[a * 3]! - xyzM[sum.from * 3]!) * d[0] +
				(xyzM[a * 3 + 1]! - xyzM[sum.from * 3 + 1]!) * d[1] +
				(xyzM[a * 3 + 2]! - xyzM[sum.from * 3 + 2]!) * d[2]) /
			6;
		sum.count++;
		sum.vertices.add(a).add(b).add(c);
	}
	const bodies = sums.map((sum): MeshBody => {
		const isClosed = Math.hypot(...sum.vector) < 1e-4 * sum.area && Math.abs(sum.volume) > 1e-12;
		return { triangleCount: sum.count, areaM2: sum.area, isClosed, volumeM3: isClosed ? sum.volume : 0, ...boxOf(xyzM, sum.vertices) };
	});
	const isTurned = bodies.map(
		(body, at) =>
			body.volumeM3 < 0 &&
			!bodies.some(
				(other, otherAt) => otherAt !== at && other.isClosed && Math.abs(other.volumeM3) > -body.volumeM3 && isInside(body, other),
			),
	);
	for (let t = 0; t < bodyOf.length; t++) {
		if (!isTurned[bodyOf[t]!]) continue;
		const b = triangles[t * 3 + 1]!;
		triangles[t * 3 + 1] = triangles[t * 3 + 2]!;
		triangles[t * 3 + 2] = b;
	}
	return {
		originM,
		xyzM,
		triangles: Uint32Array.from(triangles),
		bodyOf,
		bodies: bodies.map((body, at) => (isTurned[at] ? { ...body, volumeM3: -body.volumeM3 } : body)),
		...boxOf(xyzM, triangles),
	};
}
