import type { Vector3 } from '../geometry/frame.ts';
import { add, cross, dot, scale, unit } from './affine.ts';
import type { PlanarFace } from './planar-face.ts';
import type { SolidMesh } from './solid-mesh.ts';

/** A flat face laid out in two coordinates, metres, so that places on it can be chosen and tested. */
export type FacePlan = {
	/** Along the face; horizontal on a face that stands. */
	u: Vector3;
	/** Across; upward on a face that stands. */
	v: Vector3;
	/** The plane's point where u = v = 0. */
	foot: Vector3;
	uMin: number;
	uMax: number;
	vMin: number;
	vMax: number;
	/** u, v of three corners a triangle. */
	corners: Float64Array;
};

/** Lays a face out: along `along` where given (made square to the normal), else horizontally, else along X. */
export function planOfFace(mesh: SolidMesh, face: PlanarFace, along?: Vector3): FacePlan {
	const n = face.normal;
	const standing: Vector3 | null = Math.abs(n[2]) < 0.9986 ? unit(cross([0, 0, 1], n)) : null;
	const wanted = along ?? standing ?? [1, 0, 0];
	const u = unit([wanted[0] - n[0] * dot(wanted, n), wanted[1] - n[1] * dot(wanted, n), wanted[2] - n[2] * dot(wanted, n)]) ?? [1, 0, 0];
	const v = cross(n, u);
	const foot = scale(n, face.offsetM);
	const corners = new Float64Array(face.triangles.length * 6);
	let [uMin, uMax, vMin, vMax] = [Infinity, -Infinity, Infinity, -Infinity];
	let at = 0;
	for (const t of face.triangles) {
		for (let k = 0; k < 3; k++) {
			const vertex = mesh.triangles[t * 3 + k]! * 3;
			const p: Vector3 = [mesh.xyzM[vertex]!, mesh.xyzM[vertex + 1]!, mesh.xyzM[vertex + 2]!];
			const pu = dot(p, u);
			const pv = dot(p, v);
			corners[at++] = pu;
			corners[at++] = pv;
			uMin = Math.min(uMin, pu);
			uMax = Math.max(uMax, pu);
			vMin = Math.min(vMin, pv);
			vMax = Math.max(vMax, pv);
		}
	}
	return { u, v, foot, uMin, uMax, vMin, vMax, corners };
}

/** The point of the plane at u, v (less the mesh's origin). */
export function placeOn(plan: FacePlan, u: number, v: number): Vector3 {
	return add(plan.foot, add(scale(plan.u, u), scale(plan.v, v)));
}

/** Whether u, v lies on the face. On an edge between two triangles counts. */
export function isOnFace(plan: FacePlan, u: number, v: number): boolean {
	const c = plan.corners;
	for (let t = 0; t < c.length; t += 6) {
		const d1 = (c[t + 2]! - c[t]!) * (v - c[t + 1]!) - (c[t + 3]! - c[t + 1]!) * (u - c[t]!);
		const d2 = (c[t + 4]! - c[t + 2]!) * (v - c[t + 3]!) - (c[t + 5]! - c[t + 3]!) * (u - c[t + 2]!);
		const d3 = (c[t]! - c[t + 4]!) * (v - c[t + 5]!) - (c[t + 1]! - c[t + 5]!) * (u - c[t + 4]!);
		const slack = 1e-9;
		if ((d1 >= -slack && d2 >= -slack && d3 >= -slack) || (d1 <= slack && d2 <= slack && d3 <= slack)) return true;
	}
	return false;
}

/** Sixteen directions: between two of them no square corner comes nearer than 0.78 of the radius; between two of eight it would be 0.54. */
const around = Array.from({ length: 16 }, (_, k) => [Math.cos((k * Math.PI) / 8), Math.sin((k * Math.PI) / 8)] as const);

/** Whether the place and sixteen more on a circle of `marginM` about it all lie on the face: so none falls in an opening, over an edge or on a corner. */
export function isClear(plan: FacePlan, u: number, v: number, marginM: number): boolean {
	return isOnFace(plan, u, v) && around.every(([du, dv]) => isOnFace(plan, u + marginM * du, v + marginM * dv));
}

/** The clear place nearest to the wanted one, looked for on a grid over the face; null where there is none. */
export function nearestClear(plan: FacePlan, u: number, v: number, marginM: number, stepM = 0.1): { u: number; v: number } | null {
	if (isClear(plan, u, v, marginM)) return { u, v };
	const columns = Math.min(60, Math.ceil((plan.uMax - plan.uMin) / stepM));
	const rows = Math.min(60, Math.ceil((plan.vMax - plan.vMin) / stepM));
	const places: { u: number; v: number; far: number }[] = [];
	for (let i = 0; i < columns; i++) {
		for (let j = 0; j < rows; j++) {
			const pu = plan.uMin + ((i + 0.5) * (plan.uMax - plan.uMin)) / columns;
			const pv = plan.vMin + ((j + 0.5) * (plan.vMax - plan.vMin)) / rows;
			// Rounded, so that equal distances do not change places by the last digit.
			places.push({ u: pu, v: pv, far: Math.round(Math.hypot(pu - u, pv - v) * 1e6) });
		}
	}
	places.sort((a, b) => a.far - b.far || a.u - b.u || a.v - b.v);
	return places.find((place) => isClear(plan, place.u, place.v, marginM)) ?? null;
}

/** Stations along a length: the middle alone where it is short, else equal steps of at most `spacingM` between `insetM` from both ends. */
export function stations(from: number, to: number, spacingM: number, insetM: number): number[] {
	const length = to - from;
	if (length < 2 * insetM + 0.6) return [(from + to) / 2];
	const count = Math.min(60, Math.ceil((length - 2 * insetM) / spacingM) + 1);
	return Array.from({ length: count }, (_, i) => from + insetM + ((length - 2 * insetM) * i) / (count - 1));
}
