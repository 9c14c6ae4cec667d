import type { Vector3 } from '../geometry/frame.ts';
import { cross, dot, subtract } from './affine.ts';
import type { SolidMesh } from './solid-mesh.ts';

/** Rays against a welded mesh, all triangles tried. Metres, less the mesh's origin. Möller & Trumbore 1997. */

const cornerOf = (mesh: SolidMesh, vertex: number): Vector3 => [
	mesh.xyzM[vertex * 3]!,
	mesh.xyzM[vertex * 3 + 1]!,
	mesh.xyzM[vertex * 3 + 2]!,
];

/** How far along a ray a triangle is hit; null where it is not. */
function hitOf(mesh: SolidMesh, triangle: number, from: Vector3, way: Vector3): number | null {
	const a = cornerOf(mesh, mesh.triangles[triangle * 3]!);
	const ab = subtract(cornerOf(mesh, mesh.triangles[triangle * 3 + 1]!), a);
	const ac = subtract(cornerOf(mesh, mesh.triangles[triangle * 3 + 2]!), a);
	const p = cross(way, ac);
	const determinant = dot(ab, p);
	if (Math.abs(determinant) < 1e-14) return null;
	const s = subtract(from, a);
	const u = dot(s, p) / determinant;
	if (u < 0 || u > 1) return null;
	const q = cross(s, ab);
	const v = dot(way, q) / determinant;
	if (v < 0 || u + v > 1) return null;
	return dot(ac, q) / determinant;
}

/** The distance to the first triangle in front of a point along a unit direction; null where there is none. */
export function firstHitM(mesh: SolidMesh, from: Vector3, way: Vector3): number | null {
	let nearest: number | null = null;
	for (let t = 0; t < mesh.triangles.length / 3; t++) {
		const far = hitOf(mesh, t, from, way);
		if (far !== null && far > 0 && (nearest === null || far < nearest)) nearest = far;
	}
	return nearest;
}

/** Three directions that no drawn edge follows, so that a ray hits faces and not edges. */
const SKEW: readonly Vector3[] = [
	[0.3141, 0.5926, 0.7416],
	[-0.6535, 0.2718, 0.7064],
	[0.1123, -0.8132, -0.571],
];

/** Whether a point lies in a closed body of the mesh: an odd count of crossings for at least two of three directions. */
export function isInsideMesh(mesh: SolidMesh, point: Vector3): boolean {
	let votes = 0;
	for (const way of SKEW) {
		const crossings = new Uint32Array(mesh.bodies.length);
		for (let t = 0; t < mesh.triangles.length / 3; t++) {
			const body = mesh.bodyOf[t]!;
			if (!mesh.bodies[body]!.isClosed) continue;
			const far = hitOf(mesh, t, point, way);
			if (far !== null && far > 0) crossings[body]!++;
		}
		// A void is a body of its own inside another: inside both is outside.
		const windings = crossings.reduce((sum, count, body) => sum + (count % 2) * (mesh.bodies[body]!.volumeM3 < 0 ? -1 : 1), 0);
		if (windings > 0) votes++;
	}
	return votes >= 2;
}
