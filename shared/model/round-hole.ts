import type { Vector3 } from '../geometry/frame.ts';
import { dot } from './affine.ts';
import { STANDING_NZ } from './level-checkpoints.ts';
import type { PlanarFace } from './planar-face.ts';
import type { SolidMesh } from './solid-mesh.ts';

/** Round openings through a level body: rings of strips that look inward. Metres, less the mesh's origin. */
export type RoundHole = {
	/** On the axis, at the upper end of the ring. */
	centre: Vector3;
	diameterM: number;
};

/** Vertices lie on the true circle to single precision. */
const ON_CIRCLE_M = 0.0005;
const LEAST_STRIPS = 8;

/** Sets of strips that share corners. */
function ringsOf(mesh: SolidMesh, strips: readonly PlanarFace[]): number[][] {
	const stripsAt = new Map<number, number[]>();
	strips.forEach((strip, at) => {
		for (const t of strip.triangles) {
			for (let k = 0; k < 3; k++) {
				const vertex = mesh.triangles[t * 3 + k]!;
				const list = stripsAt.get(vertex);
				if (!list) stripsAt.set(vertex, [at]);
				else if (list.at(-1) !== at) list.push(at);
			}
		}
	});
	const ringOf = new Int32Array(strips.length).fill(-1);
	const rings: number[][] = [];
	const verticesOf = (at: number): Set<number> =>
		new Set(strips[at]!.triangles.flatMap((t) => [0, 1, 2].map((k) => mesh.triangles[t * 3 + k]!)));
	for (let start = 0; start < strips.length; start++) {
		if (ringOf[start]! >= 0) continue;
		const ring = [start];
		ringOf[start] = rings.length;
		for (let i = 0; i < ring.length; i++) {
			for (const vertex of verticesOf(ring[i]!)) {
				for (const other of stripsAt.get(vertex)!) {
					if (ringOf[other]! >= 0) continue;
					ringOf[other] = rings.length;
					ring.push(other);
				}
			}
		}
		rings.push(ring);
	}
	return rings;
}

/**
 * The round openings of a slab-like body: strips of a curved inner surface that stand, all around one axis. The circle is the mean of the
 * corners (the engine spaces them evenly on the true circle); a ring whose corners are not on it, or that is open, is none.
 */
export function roundHoles(mesh: SolidMesh, faces: readonly PlanarFace[]): RoundHole[] {
	const strips = faces.filter((face) => face.isCurved && face.isProven && !face.isOuter && Math.abs(face.normal[2]) < STANDING_NZ);
	const holes: RoundHole[] = [];
	for (const ring of ringsOf(mesh, strips)) {
		if (ring.length < LEAST_STRIPS) continue;
		// Each corner once in plan, whatever stands above it.
		const corners = new Map<string, [number, number]>();
		let top = -Infinity;
		for (const at of ring) {
			for (const t of strips[at]!.triangles) {
				for (let k = 0; k < 3; k++) {
					const v = mesh.triangles[t * 3 + k]! * 3;
					const [x, y] = [mesh.xyzM[v]!, mesh.xyzM[v + 1]!];
					corners.set(`${Math.round(x * 5000)},${Math.round(y * 5000)}`, [x, y]);
					top = Math.max(top, mesh.xyzM[v + 2]!);
				}
			}
		}
		const centre = circleCentre([...corners.values()]);
		if (!centre) continue;
		const radii = [...corners.values()].map(([x, y]) => Math.hypot(x - centre[0], y - centre[1]));
		const radius = radii.reduce((sum, r) => sum + r, 0) / radii.length;
		if (radii.some((r) => Math.abs(r - radius) > ON_CIRCLE_M)) continue;
		// Looking inward, and all around: the normals, weighted by the strips' widths, sum to nothing.
		let [sx, sy, total] = [0, 0, 0];
		let isInward = true;
		for (const at of ring) {
			const { normal, areaM2, centroid } = strips[at]!;
			sx += normal[0] * areaM2;
			sy += normal[1] * areaM2;
			total += areaM2;
			if (dot(normal, [centroid[0] - centre[0], centroid[1] - centre[1], 0]) > 0) isInward = false;
		}
		if (!isInward || Math.hypot(sx, sy) > 0.01 * total) continue;
		holes.push({ centre: [centre[0], centre[1], top], diameterM: 2 * radius });
	}
	return holes.sort((a, b) => a.centre[0] - b.centre[0] || a.centre[1] - b.centre[1]);
}

/** Centre of the circle nearest to the points in the sense of Kåsa 1976 (linear least squares of x² + y²); null where they lie on a line. */
function circleCentre(points: readonly [number, number][]): [number, number] | null {
	const n = points.length;
	if (n < 3) return null;
	const mx = points.reduce((sum, [x]) => sum + x, 0) / n;
	const my = points.reduce((sum, [, y]) => sum + y, 0) / n;
	let [xx, xy, yy, xz, yz] = [0, 0, 0, 0, 0];
	for (const [px, py] of points) {
		const [x, y] = [px - mx, py - my];
		const z = x * x + y * y;
		xx += x * x;
		xy += x * y;
		yy += y * y;
		xz += x * z;
		yz += y * z;
	}
	const determinant = xx * yy - xy * xy;
	if (!(determinant > 1e-12 * (xx + yy) ** 2)) return null;
	return [mx + (xz * yy - yz * xy) / (2 * determinant), my + (yz * xx - xz * xy) / (2 * determinant)];
}
