import type { Vector3 } from '../geometry/frame.ts';
import { doubleAreaVector, type SolidMesh } from './solid-mesh.ts';

/** Flat faces of a mesh: coplanar triangles put together, the largest first. Lengths in metres, less the mesh's origin. */
export type PlanarFace = {
	/** Unit, outward where `isProven`. */
	normal: Vector3;
	/** normal · p for points of the face. */
	offsetM: number;
	areaM2: number;
	centroid: Vector3;
	/** Triangle numbers of the mesh. */
	triangles: number[];
	/** Nothing of the element lies in front of it. */
	isOuter: boolean;
	/** Which side is out is known: by an enclosed volume, or because the whole element lies behind. */
	isProven: boolean;
	/** One strip of a surface that is round in truth. */
	isCurved: boolean;
};

const COS_TURN = Math.cos((0.2 * Math.PI) / 180);
const FLAT_M = 0.0005;
const OUTER_CLOSED_M = 0.002;
const OUTER_OPEN_M = 0.0002;
/** Tessellated arcs turn by at most so much from one strip to the next (12 a circle). */
const ARC_STEP_RAD = (31 * Math.PI) / 180;

/** More flat pieces than any part with checkpoints has: such a body is curved or twisted. */
export const MAX_FACES = 3000;

type Group = {
	normal: Vector3;
	offset: number;
	area: [number, number, number];
	moment: [number, number, number];
	total: number;
	triangles: number[];
	closed: boolean;
};

function groupTriangles(mesh: SolidMesh): Group[] | null {
	const { xyzM: xyz, triangles } = mesh;
	const count = triangles.length / 3;
	const areas = new Float64Array(count);
	const normals = new Float64Array(count * 3);
	const order = new Uint32Array(count);
	for (let t = 0; t < count; t++) {
		const d = doubleAreaVector(xyz, triangles[t * 3]!, triangles[t * 3 + 1]!, triangles[t * 3 + 2]!);
		const size = Math.hypot(...d);
		areas[t] = size / 2;
		normals[t * 3] = d[0] / size;
		normals[t * 3 + 1] = d[1] / size;
		normals[t * 3 + 2] = d[2] / size;
		order[t] = t;
	}
	order.sort((a, b) => areas[b]! - areas[a]! || a - b);
	const groups: Group[] = [];
	for (const t of order) {
		const [a, b, c] = [triangles[t * 3]! * 3, triangles[t * 3 + 1]! * 3, triangles[t * 3 + 2]! * 3];
		const nx = normals[t * 3]!;
		const ny = normals[t * 3 + 1]!;
		const nz = normals[t * 3 + 2]!;
		const isClosed = mesh.bodies[mesh.bodyOf[t]!]!.isClosed;
		let found: Group | undefined;
		for (const group of groups) {
			const [gx, gy, gz] = group.normal;
			const turn = gx * nx + gy * ny + gz * nz;
			if (turn < 0.9 || group.closed !== isClosed) continue;
			const da = Math.abs(gx * xyz[a]! + gy * xyz[a + 1]! + gz * xyz[a + 2]! - group.offset);
			if (da > FLAT_M) continue;
			const db = Math.abs(gx * xyz[b]! + gy * xyz[b + 1]! + gz * xyz[b + 2]! - group.offset);
			const dc = Math.abs(gx * xyz[c]! + gy * xyz[c + 1]! + gz * xyz[c + 2]! - group.offset);
			const off = Math.max(da, db, dc);
			// The normal of a triangle narrower than 2 mm is at the mercy of single precision: there its corners decide.
			if ((turn > COS_TURN && off < FLAT_M) || (off < FLAT_M / 5 && isNarrow(xyz, a, b, c, areas[t]!))) {
				found = group;
				break;
			}
		}
		if (!found) {
			if (groups.length >= MAX_FACES) return null;
			found = {
				normal: [nx, ny, nz],
				offset: nx * xyz[a]! + ny * xyz[a + 1]! + nz * xyz[a + 2]!,
				area: [0, 0, 0],
				moment: [0, 0, 0],
				total: 0,
				triangles: [],
				closed: isClosed,
			};
			groups.push(found);
		}
		const area = areas[t]!;
		found.total += area;
		found.triangles.push(t);
		found.area[0] += nx * area;
		found.area[1] += ny * area;
		found.area[2] += nz * area;
		for (let k = 0; k < 3; k++) found.moment[k]! += (area * (xyz[a + k]! + xyz[b + k]! + xyz[c + k]!)) / 3;
	}
	return groups;
}

function isNarrow(xyz: Float64Array, a: number, b: number, c: number, area: number): boolean {
	const side = (p: number, q: number): number => Math.hypot(xyz[p]! - xyz[q]!, xyz[p + 1]! - xyz[q + 1]!, xyz[p + 2]! - xyz[q + 2]!);
	return (2 * area) / Math.max(side(a, b), side(b, c), side(c, a)) < 0.002;
}

/** Lowest and highest of direction · vertex over the whole mesh. */
export function extentAlong(mesh: SolidMesh, direction: Vector3): { min: number; max: number } {
	let min = Infinity;
	let max = -Infinity;
	const { xyzM: xyz } = mesh;
	for (let v = 0; v < xyz.length; v += 3) {
		const along = direction[0] * xyz[v]! + direction[1] * xyz[v + 1]! + direction[2] * xyz[v + 2]!;
		if (along < min) min = along;
		if (along > max) max = along;
	}
	return { min, max };
}

/** Marks strips of round surfaces: two neighbours, both at most an arc's step away and turning the same way, of about the same step. */
function markCurved(mesh: SolidMesh, faces: PlanarFace[]): void {
	const faceOf = new Int32Array(mesh.triangles.length / 3).fill(-1);
	faces.forEach((face, at) => {
		for (const t of face.triangles) faceOf[t] = at;
	});
	const edges = new Map<number, { face: number; length: number }>();
	const vertexCount = mesh.xyzM.length / 3;
	const neighbours = faces.map(() => new Map<number, number>());
	for (let t = 0; t < faceOf.length; t++) {
		for (let k = 0; k < 3; k++) {
			const a = mesh.triangles[t * 3 + k]!;
			const b = mesh.triangles[t * 3 + ((k + 1) % 3)]!;
			const key = Math.min(a, b) * vertexCount + Math.max(a, b);
			const other = edges.get(key);
			if (!other) {
				edges.set(key, { face: faceOf[t]!, length: 0 });
				continue;
			}
			if (other.face === faceOf[t]) continue;
			const length = Math.hypot(
				mesh.xyzM[a * 3]! - mesh.xyzM[b * 3]!,
				mesh.xyzM[a * 3 + 1]! - mesh.xyzM[b * 3 + 1]!,
				mesh.xyzM[a * 3 + 2]! - mesh.xyzM[b * 3 + 2]!,
			);
			for (const [from, to] of [
				[other.face, faceOf[t]!],
				[faceOf[t]!, other.face],
			] as const)
				neighbours[from]!.set(to, (neighbours[from]!.get(to) ?? 0) + length);
		}
	}
	const step = (a: PlanarFace, b: PlanarFace): { angle: number; sense: number } => {
		const cosine = a.normal[0] * b.normal[0] + a.normal[1] * b.normal[1] + a.normal[2] * b.normal[2];
		// Convex where the neighbour's middle lies behind the face.
		const ahead = a.normal[0] * b.centroid[0] + a.normal[1] * b.centroid[1] + a.normal[2] * b.centroid[2] - a.offsetM;
		return { angle: Math.acos(Math.min(1, cosine)), sense: ahead < 0 ? 1 : -1 };
	};
	const isStrip = faces.map((face, at) => {
		const near = [...neighbours[at]!.keys()]
			.map((other) => step(face, faces[other]!))
			.filter(({ angle }) => angle > 0.0035 && angle < ARC_STEP_RAD);
		return near.some((one, i) =>
			near.some((two, j) => j > i && one.sense === two.sense && Math.abs(one.angle - two.angle) < 0.02 + 0.1 * one.angle),
		);
	});
	faces.forEach((face, at) => {
		face.isCurved =
			isStrip[at]! ||
			// The last strip of an arc has one such neighbour, and its width; a flat face beside a fillet is much wider.
			[...neighbours[at]!.keys()].some(
				(other) => isStrip[other] && step(face, faces[other]!).angle < ARC_STEP_RAD && face.areaM2 < 1.7 * faces[other]!.areaM2,
			);
	});
}

/** Largest first. Equal ones by the way they look (east, north, up first) and by where they are, so that rounding in another revision does not change the order. */
function inFixedOrder(a: Group, b: Group): number {
	if (Math.abs(a.total - b.total) > 1e-5 * Math.max(a.total, b.total)) return b.total - a.total;
	for (let k = 0; k < 3; k++) {
		const difference = Math.round(b.normal[k]! * 1000) - Math.round(a.normal[k]! * 1000);
		if (difference !== 0) return difference;
	}
	return Math.round((b.offset - a.offset) * 1e4);
}

/**
 * The flat faces of a mesh, largest first: triangles within 0.2° and 0.5 mm of the largest one's plane. Outer: no vertex of the element lies
 * more than 2 mm in front (0.2 mm where the body is open, and then the face is turned so that all lies behind it).
 * Null where there are more than MAX_FACES: a curved or twisted body.
 */
export function planarFaces(mesh: SolidMesh): PlanarFace[] | null {
	const groups = groupTriangles(mesh);
	if (!groups) return null;
	groups.sort(inFixedOrder);
	const faces = groups.map((group): PlanarFace => {
		const size = Math.hypot(...group.area);
		let normal: Vector3 = [group.area[0] / size, group.area[1] / size, group.area[2] / size];
		const centroid: Vector3 = [group.moment[0] / group.total, group.moment[1] / group.total, group.moment[2] / group.total];
		let offsetM = normal[0] * centroid[0] + normal[1] * centroid[1] + normal[2] * centroid[2];
		const extent = extentAlong(mesh, normal);
		let isOuter = extent.max - offsetM <= (group.closed ? OUTER_CLOSED_M : OUTER_OPEN_M);
		let isProven = group.closed || isOuter;
		if (!group.closed && offsetM - extent.min <= OUTER_OPEN_M) {
			// A single sheet has all of it in the plane: nothing tells which side is out.
			isProven = !isOuter;
			if (!isOuter) {
				normal = [-normal[0], -normal[1], -normal[2]];
				offsetM = -offsetM;
				isOuter = true;
			}
		}
		return { normal, offsetM, areaM2: group.total, centroid, triangles: group.triangles, isOuter, isProven, isCurved: false };
	});
	markCurved(mesh, faces);
	return faces;
}
