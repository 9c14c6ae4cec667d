import type { Vector3 } from '../geometry/frame.ts';
import { dot, lengthOf, scale, subtract, unit } from './affine.ts';
import { extentAlong, type PlanarFace } from './planar-face.ts';
import type { SolidMesh } from './solid-mesh.ts';

/** What an element's body looks like: read from its flat faces, not from its class. Metres, less the mesh's origin. */

/** A prism's axis: two outer, opposite, equal caps whose area times their distance is the volume (±2 %): also tilted, round or I-shaped. */
export type PrismAxis = {
	/** Middle of the one cap and of the other. For an upright axis: base, top. */
	from: Vector3;
	to: Vector3;
	/** From `from` to `to`, unit. */
	direction: Vector3;
	lengthM: number;
	capAreaM2: number;
	caps: readonly [PlanarFace, PlanarFace];
};

const OPPOSITE = -Math.cos((0.2 * Math.PI) / 180);

/** All pairs of caps that make the body a prism, the longest first. Needs closed bodies. */
export function prismAxes(mesh: SolidMesh, faces: readonly PlanarFace[]): PrismAxis[] {
	if (!mesh.bodies.every((body) => body.isClosed)) return [];
	const volume = mesh.bodies.reduce((sum, body) => sum + body.volumeM3, 0);
	if (!(volume > 1e-9)) return [];
	const outer = faces.filter((face) => face.isOuter && face.isProven && face.areaM2 > 1e-7).slice(0, 400);
	const found: PrismAxis[] = [];
	for (let i = 0; i < outer.length; i++) {
		for (let j = i + 1; j < outer.length; j++) {
			const a = outer[i]!;
			const b = outer[j]!;
			// Sorted by area: no later one is nearer.
			if (b.areaM2 < a.areaM2 * 0.99) break;
			if (dot(a.normal, b.normal) > OPPOSITE) continue;
			const distance = a.offsetM + b.offsetM;
			if (distance < 1e-5 || Math.abs((a.areaM2 * distance) / volume - 1) > 0.02) continue;
			const isUp =
				b.centroid[2] > a.centroid[2] + 1e-6 || (Math.abs(b.centroid[2] - a.centroid[2]) <= 1e-6 && isBefore(a.centroid, b.centroid));
			const [low, high] = isUp ? [a, b] : [b, a];
			const along = subtract(high.centroid, low.centroid);
			const direction = unit(along);
			if (!direction) continue;
			found.push({ from: low.centroid, to: high.centroid, direction, lengthM: lengthOf(along), capAreaM2: a.areaM2, caps: [low, high] });
		}
	}
	return found.sort((a, b) => b.lengthM - a.lengthM);
}

/** West to east, then south to north, within 0.1 mm. */
const isBefore = (a: Vector3, b: Vector3): boolean => (Math.abs(a[0] - b[0]) > 1e-4 ? a[0] < b[0] : a[1] < b[1]);

/** The two largest outer, opposite, parallel flat faces: a wall's sides, a slab's top and soffit, a plate's faces. */
export type FacePair = { first: PlanarFace; second: PlanarFace; distanceM: number };

/** The pair with the largest smaller face; null where no outer face has an outer opposite of at least a tenth of its area. */
export function largestPair(faces: readonly PlanarFace[], isWanted: (face: PlanarFace) => boolean = () => true): FacePair | null {
	const outer = faces.filter((face) => face.isOuter && face.isProven && !face.isCurved && isWanted(face)).slice(0, 60);
	let best: FacePair | null = null;
	for (let i = 0; i < outer.length; i++) {
		const first = outer[i]!;
		if (best && first.areaM2 <= best.second.areaM2) break;
		const second = outer.slice(i + 1).find((face) => dot(face.normal, first.normal) < OPPOSITE);
		if (second && second.areaM2 > first.areaM2 * 0.1 && (!best || second.areaM2 > best.second.areaM2))
			best = { first, second, distanceM: first.offsetM + second.offsetM };
	}
	return best;
}

/** Extents of the section square to an axis: the larger and the smaller of the tightest rectangle along one of its flat sides; for a round one the diameter twice (from the vertices, which lie on the true circle). */
export function sectionOf(
	mesh: SolidMesh,
	faces: readonly PlanarFace[],
	axis: PrismAxis,
): { widthM: number; depthM: number; isRound: boolean } {
	const sides = faces.filter((face) => Math.abs(dot(face.normal, axis.direction)) < 0.0175 && face.areaM2 > 1e-7);
	const flat = sides.filter((face) => !face.isCurved);
	const flatArea = flat.reduce((sum, face) => sum + face.areaM2, 0);
	const sideArea = sides.reduce((sum, face) => sum + face.areaM2, 0);
	if (sideArea > 0 && flatArea < sideArea * 0.02) {
		let radius = 0;
		for (let v = 0; v < mesh.xyzM.length; v += 3) {
			const r = subtract([mesh.xyzM[v]!, mesh.xyzM[v + 1]!, mesh.xyzM[v + 2]!], axis.from);
			radius = Math.max(radius, lengthOf(subtract(r, scale(axis.direction, dot(r, axis.direction)))));
		}
		return { widthM: 2 * radius, depthM: 2 * radius, isRound: true };
	}
	const side = (flat[0] ?? sides[0])?.normal ?? [1, 0, 0];
	const across = unit([
		axis.direction[1] * side[2] - axis.direction[2] * side[1],
		axis.direction[2] * side[0] - axis.direction[0] * side[2],
		axis.direction[0] * side[1] - axis.direction[1] * side[0],
	]) ?? [0, 1, 0];
	// Of a tilted prism the extents square to the axis count, measured on its vertices.
	const e1 = extentSquare(mesh, side, axis);
	const e2 = extentSquare(mesh, across, axis);
	return { widthM: Math.max(e1, e2), depthM: Math.min(e1, e2), isRound: false };
}

function extentSquare(mesh: SolidMesh, direction: Vector3, axis: PrismAxis): number {
	const square = unit(subtract(direction, scale(axis.direction, dot(direction, axis.direction)))) ?? direction;
	const extent = extentAlong(mesh, square);
	return extent.max - extent.min;
}

const SECTORS = ['East', 'North-east', 'North', 'North-west', 'West', 'South-west', 'South', 'South-east'] as const;
const SECTOR_CODES = ['E', 'NE', 'N', 'NW', 'W', 'SW', 'S', 'SE'] as const;

/** The compass word of a direction seen in plan (plan north = +Y), and its letters. */
export function compassOf(direction: readonly [number, number, ...number[]]): { word: string; code: string } {
	// A hair of turn, so that exactly diagonal directions do not depend on the last digit.
	const angle = Math.atan2(direction[1], direction[0]) + 1e-6;
	const sector = ((Math.round(angle / (Math.PI / 4)) % 8) + 8) % 8;
	return { word: SECTORS[sector]!, code: SECTOR_CODES[sector]! };
}
