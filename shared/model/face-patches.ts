import type { Vector3 } from '../geometry/frame.ts';
import { planOfFace } from './face-plan.ts';
import type { PlanarFace } from './planar-face.ts';
import { doubleAreaVector, type SolidMesh } from './solid-mesh.ts';

/** Pieces nearer than this belong together, metres. */
const TOUCH_M = 0.001;
const MOST_PATCHES = 200;

type Rectangle = { uMin: number; uMax: number; vMin: number; vMax: number };

const touches = (a: Rectangle, b: Rectangle): boolean =>
	a.uMin <= b.uMax + TOUCH_M && b.uMin <= a.uMax + TOUCH_M && a.vMin <= b.vMax + TOUCH_M && b.vMin <= a.vMax + TOUCH_M;

/** Sets of triangles that share a corner. */
function connected(mesh: SolidMesh, triangles: readonly number[]): number[][] {
	const parent = triangles.map((_, at) => at);
	const root = (at: number): number => {
		let here = at;
		while (parent[here] !== here) {
			parent[here] = parent[parent[here]!]!;
			here = parent[here]!;
		}
		return here;
	};
	const firstAt = new Map<number, number>();
	triangles.forEach((t, at) => {
		for (let k = 0; k < 3; k++) {
			const vertex = mesh.triangles[t * 3 + k]!;
			const other = firstAt.get(vertex);
			if (other === undefined) firstAt.set(vertex, at);
			else parent[root(at)] = root(other);
		}
	});
	const sets = new Map<number, number[]>();
	triangles.forEach((t, at) => {
		const set = sets.get(root(at));
		if (set) set.push(t);
		else sets.set(root(at), [t]);
	});
	return [...sets.values()];
}

/**
 * A flat face's pieces that do not touch: the sills of several windows at one height are one plane, but places of their own. Pieces that
 * only T-junctions part (booleans leave them) count as one: their rectangles touch. In the order of their places, west to east, south to
 * north, upward.
 */
export function patchesOf(mesh: SolidMesh, face: PlanarFace): PlanarFace[] {
	const sets = connected(mesh, face.triangles);
	if (sets.length === 1) return [face];
	let pieces = sets.slice(0, MOST_PATCHES).map((triangles) => ({ triangles, plan: planOfFace(mesh, { ...face, triangles }) as Rectangle }));
	for (let isChanged = true; isChanged; ) {
		isChanged = false;
		const merged: typeof pieces = [];
		for (const piece of pieces) {
			const near = merged.find((other) => touches(other.plan, piece.plan));
			if (!near) {
				merged.push(piece);
				continue;
			}
			isChanged = true;
			near.triangles = [...near.triangles, ...piece.triangles];
			near.plan = {
				uMin: Math.min(near.plan.uMin, piece.plan.uMin),
				uMax: Math.max(near.plan.uMax, piece.plan.uMax),
				vMin: Math.min(near.plan.vMin, piece.plan.vMin),
				vMax: Math.max(near.plan.vMax, piece.plan.vMax),
			};
		}
		pieces = merged;
	}
	const patches = pieces.map(({ triangles }) => patchOf(mesh, face, triangles));
	const order = (a: PlanarFace, b: PlanarFace): number => {
		for (let k = 0; k < 3; k++) {
			const difference = Math.round((a.centroid[k]! - b.centroid[k]!) * 1000);
			if (difference !== 0) return difference;
		}
		return 0;
	};
	return patches.sort(order);
}

function patchOf(mesh: SolidMesh, face: PlanarFace, triangles: number[]): PlanarFace {
	const moment: [number, number, number] = [0, 0, 0];
	let areaM2 = 0;
	for (const t of triangles) {
		const [a, b, c] = [mesh.triangles[t * 3]!, mesh.triangles[t * 3 + 1]!, mesh.triangles[t * 3 + 2]!];
		const area = Math.hypot(...doubleAreaVector(mesh.xyzM, a, b, c)) / 2;
		areaM2 += area;
		for (let k = 0; k < 3; k++) moment[k]! += (area * (mesh.xyzM[a * 3 + k]! + mesh.xyzM[b * 3 + k]! + mesh.xyzM[c * 3 + k]!)) / 3;
	}
	const centroid: Vector3 = [moment[0] / areaM2, moment[1] / areaM2, moment[2] / areaM2];
	return { ...face, triangles, areaM2, centroid };
}
