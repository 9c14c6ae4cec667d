import type { Vector3 } from '../geometry/frame.ts';
import { dot } from './affine.ts';
import { type CheckpointDraft, faceDraft, levelDraft, metresInWords } from './checkpoint-draft.ts';
import { compassOf } from './element-shape.ts';
import { type FacePlan, isClear, nearestClear, placeOn, planOfFace, stations } from './face-plan.ts';
import type { PlanarFace } from './planar-face.ts';
import type { Spacing } from './reading-choices.ts';
import { doubleAreaVector, type SolidMesh } from './solid-mesh.ts';

export const LEVEL_NZ = 0.9986;
export const STANDING_NZ = 0.0175;

/** The direction of the longest outline edge of a nearly level face, so that its grid follows the element and not the axes. */
export function longestEdge(mesh: SolidMesh, face: PlanarFace): Vector3 {
	const counts = new Map<number, number>();
	const vertexCount = mesh.xyzM.length / 3;
	const key = (a: number, b: number): number => Math.min(a, b) * vertexCount + Math.max(a, b);
	const edges: [number, number][] = [];
	for (const t of face.triangles) {
		for (let k = 0; k < 3; k++) {
			const a = mesh.triangles[t * 3 + k]!;
			const b = mesh.triangles[t * 3 + ((k + 1) % 3)]!;
			counts.set(key(a, b), (counts.get(key(a, b)) ?? 0) + 1);
			edges.push([a, b]);
		}
	}
	let best: Vector3 = [1, 0, 0];
	let longest = 0;
	for (const [a, b] of edges) {
		if (counts.get(key(a, b)) !== 1) continue;
		const d: Vector3 = [
			mesh.xyzM[b * 3]! - mesh.xyzM[a * 3]!,
			mesh.xyzM[b * 3 + 1]! - mesh.xyzM[a * 3 + 1]!,
			mesh.xyzM[b * 3 + 2]! - mesh.xyzM[a * 3 + 2]!,
		];
		const length = Math.hypot(...d);
		if (length > longest + 1e-4) {
			longest = length;
			// One sense for the two ways round an edge: east, else north.
			const sense = d[0] > 1e-6 * length || (Math.abs(d[0]) <= 1e-6 * length && d[1] > 0) ? 1 : -1;
			best = [(d[0] / length) * sense, (d[1] / length) * sense, (d[2] / length) * sense];
		}
	}
	return best;
}

/** Where on a face, in words, from how far along both its ways: "middle", "north-east corner", "west side", else "4.0 m from its west end". */
function whereOn(plan: FacePlan, u: number, v: number): string {
	const du = (u - (plan.uMin + plan.uMax) / 2) / Math.max(1e-9, (plan.uMax - plan.uMin) / 2);
	const dv = (v - (plan.vMin + plan.vMax) / 2) / Math.max(1e-9, (plan.vMax - plan.vMin) / 2);
	if (Math.abs(du) < 0.02 && Math.abs(dv) < 0.02) return 'middle';
	const isAtU = plan.uMax - plan.uMin - 2 * Math.abs(u - (plan.uMin + plan.uMax) / 2) < 1.1;
	const isAtV = plan.vMax - plan.vMin - 2 * Math.abs(v - (plan.vMin + plan.vMax) / 2) < 1.1;
	const toward = (a: number, b: number): string =>
		compassOf([plan.u[0] * a + plan.v[0] * b, plan.u[1] * a + plan.v[1] * b]).word.toLowerCase();
	if (isAtU && isAtV) return `${toward(Math.sign(du) * (plan.uMax - plan.uMin > 0 ? 1 : 0), Math.sign(dv))} corner`;
	const fromU = Math.min(u - plan.uMin, plan.uMax - u);
	const fromV = Math.min(v - plan.vMin, plan.vMax - v);
	const sideU = toward(u - plan.uMin <= plan.uMax - u ? -1 : 1, 0);
	const sideV = toward(0, v - plan.vMin <= plan.vMax - v ? -1 : 1);
	return `${metresInWords(fromU)} from its ${sideU} side, ${metresInWords(fromV)} from its ${sideV} side`;
}

/** Places on a coarse grid away from edges and openings: at most about 40 (at the usual step), at least the one nearest the middle. */
function gridPlaces(plan: FacePlan, areaM2: number, spacing: Spacing): { u: number; v: number }[] {
	const width = plan.uMax - plan.uMin;
	const height = plan.vMax - plan.vMin;
	const inset = Math.min(0.5, Math.min(width, height) / 4);
	const margin = Math.min(0.3, Math.max(0.02, inset * 0.6));
	const stepM = spacing.levelSpacingM * Math.max(1, Math.sqrt(areaM2 / 270));
	const places: { u: number; v: number }[] = [];
	for (const v of stations(plan.vMin, plan.vMax, stepM, inset)) {
		for (const u of stations(plan.uMin, plan.uMax, stepM, inset)) if (isClear(plan, u, v, margin)) places.push({ u, v });
	}
	const middle = { u: (plan.uMin + plan.uMax) / 2, v: (plan.vMin + plan.vMax) / 2 };
	const isNearMiddle = places.some((place) => Math.hypot(place.u - middle.u, place.v - middle.v) < 0.3 * stepM);
	if (!isNearMiddle) {
		const clear =
			nearestClear(plan, middle.u, middle.v, margin, Math.max(0.1, Math.max(width, height) / 40)) ??
			nearestClear(plan, middle.u, middle.v, 0.02);
		if (clear && !places.some((place) => Math.hypot(place.u - clear.u, place.v - clear.v) < 0.5)) places.push(clear);
	}
	return places;
}

/** Levels on the top or soffit of a slab, roof or footing; faces along their own normal where it is too steep for a level. */
export function spreadOverFace(mesh: SolidMesh, face: PlanarFace, spacing: Spacing): CheckpointDraft[] {
	const isLevel = Math.abs(face.normal[2]) > LEVEL_NZ;
	const plan = planOfFace(mesh, face, isLevel ? longestEdge(mesh, face) : undefined);
	const isUp = face.normal[2] > 0;
	return gridPlaces(plan, face.areaM2, spacing).map(({ u, v }) => {
		const place = placeOn(plan, u, v);
		if (isLevel) return levelDraft(mesh, face, place[0], place[1], `${isUp ? 'Top' : 'Soffit'}, ${whereOn(plan, u, v)}`, isUp ? 'T' : 'U');
		return faceDraft(face, place, `${isUp ? 'Upper' : 'Lower'} face, ${whereOn(plan, u, v)}`, isUp ? 'F' : 'G');
	});
}

/** Faces on the outer standing edges of a slab, roof or footing, at half their height, each half as far again as on other faces. */
export function edgeFaces(mesh: SolidMesh, faces: readonly PlanarFace[], spacing: Spacing): CheckpointDraft[] {
	const drafts: CheckpointDraft[] = [];
	for (const face of faces.slice(0, 80)) {
		if (!face.isOuter || !face.isProven || face.isCurved || Math.abs(face.normal[2]) > STANDING_NZ) continue;
		const plan = planOfFace(mesh, face);
		const height = plan.vMax - plan.vMin;
		if (height < 0.08 || plan.uMax - plan.uMin < 0.3) continue;
		const compass = compassOf(face.normal);
		for (const u of stations(plan.uMin, plan.uMax, 1.5 * spacing.faceSpacingM, 0.5)) {
			const v = (plan.vMin + plan.vMax) / 2;
			if (!isClear(plan, u, v, Math.min(0.1, height / 4))) continue;
			const isMiddle = Math.abs(u - (plan.uMin + plan.uMax) / 2) < 0.01;
			const nearFrom = u - plan.uMin <= plan.uMax - u;
			const end = compassOf([plan.u[0] * (nearFrom ? -1 : 1), plan.u[1] * (nearFrom ? -1 : 1)]).word.toLowerCase();
			const where = isMiddle ? 'middle' : `${metresInWords(Math.min(u - plan.uMin, plan.uMax - u))} from its ${end} end`;
			drafts.push(faceDraft(face, placeOn(plan, u, v), `${compass.word} edge, ${where}`, compass.code));
		}
	}
	return drafts;
}

/** The largest outer face that looks up (or down) and lies nearly level; null where there is none. */
export function levelFace(faces: readonly PlanarFace[], isUp: boolean, leastNz = LEVEL_NZ): PlanarFace | null {
	return (
		faces.find((face) => face.isOuter && face.isProven && !face.isCurved && (isUp ? face.normal[2] : -face.normal[2]) > leastNz) ?? null
	);
}

/** Levels on the treads of a stair and its landings: faces that look up, with nothing of the stair above them, lowest first. */
export function treadLevels(mesh: SolidMesh, faces: readonly PlanarFace[]): CheckpointDraft[] {
	const treads = faces
		.filter((face) => face.isProven && !face.isCurved && face.normal[2] > LEVEL_NZ && face.areaM2 > 0.08)
		.sort((a, b) => a.centroid[2] - b.centroid[2])
		.slice(0, 40);
	const drafts: CheckpointDraft[] = [];
	treads.forEach((face, at) => {
		const plan = planOfFace(mesh, face, longestEdge(mesh, face));
		const clear = nearestClear(plan, (plan.uMin + plan.uMax) / 2, (plan.vMin + plan.vMax) / 2, 0.08);
		if (!clear) return;
		const place = placeOn(plan, clear.u, clear.v);
		if (isCovered(mesh, place)) return;
		drafts.push(levelDraft(mesh, face, place[0], place[1], `Tread ${at + 1} from below, middle`, 'T'));
	});
	return drafts;
}

/** Whether a triangle lies above a place, within 2.5 m. */
function isCovered(mesh: SolidMesh, place: Vector3): boolean {
	const { xyzM: xyz, triangles } = mesh;
	for (let t = 0; t < triangles.length; t += 3) {
		const [a, b, c] = [triangles[t]!, triangles[t + 1]!, triangles[t + 2]!];
		const d = doubleAreaVector(xyz, a, b, c);
		if (Math.abs(d[2]) < 1e-12) continue;
		const z = xyz[a * 3 + 2]! - (d[0] * (place[0] - xyz[a * 3]!) + d[1] * (place[1] - xyz[a * 3 + 1]!)) / d[2];
		if (z < place[2] + 0.005 || z > place[2] + 2.5) continue;
		const side = (p: number, q: number): number =>
			(xyz[q * 3]! - xyz[p * 3]!) * (place[1] - xyz[p * 3 + 1]!) - (xyz[q * 3 + 1]! - xyz[p * 3 + 1]!) * (place[0] - xyz[p * 3]!);
		const [s1, s2, s3] = [side(a, b), side(b, c), side(c, a)];
		if ((s1 >= 0 && s2 >= 0 && s3 >= 0) || (s1 <= 0 && s2 <= 0 && s3 <= 0)) return true;
	}
	return false;
}

/** The extents of the mesh along a level face's main direction and across it: longer, shorter. */
export function planExtents(mesh: SolidMesh, along: Vector3): { longerM: number; shorterM: number } {
	let [u0, u1, v0, v1] = [Infinity, -Infinity, Infinity, -Infinity];
	for (let v = 0; v < mesh.xyzM.length; v += 3) {
		const p: Vector3 = [mesh.xyzM[v]!, mesh.xyzM[v + 1]!, 0];
		const pu = dot(p, along);
		const pv = -p[0] * along[1] + p[1] * along[0];
		u0 = Math.min(u0, pu);
		u1 = Math.max(u1, pu);
		v0 = Math.min(v0, pv);
		v1 = Math.max(v1, pv);
	}
	return { longerM: Math.max(u1 - u0, v1 - v0), shorterM: Math.min(u1 - u0, v1 - v0) };
}
