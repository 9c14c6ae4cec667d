import type { Vector3 } from '../geometry/frame.ts';

/** Placements and vectors of a model, double precision. An affine map is twelve numbers, three rows of [x, y, z, shift]: p ↦ R·p + t. */
export type Affine = readonly number[];

export const identityAffine: Affine = [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0];

export const add = (a: Vector3, b: Vector3): Vector3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const subtract = (a: Vector3, b: Vector3): Vector3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const scale = (a: Vector3, factor: number): Vector3 => [a[0] * factor, a[1] * factor, a[2] * factor];
export const dot = (a: Vector3, b: Vector3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const cross = (a: Vector3, b: Vector3): Vector3 => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
export const lengthOf = (a: Vector3): number => Math.hypot(a[0], a[1], a[2]);
/** Null for a vector without length. */
export function unit(a: Vector3): Vector3 | null {
	const size = lengthOf(a);
	return size > 1e-300 && Number.isFinite(size) ? [a[0] / size, a[1] / size, a[2] / size] : null;
}

/** a after b: p ↦ a(b(p)). */
export function compose(a: Affine, b: Affine): Affine {
	const out: number[] = [];
	for (let row = 0; row < 3; row++) {
		for (let column = 0; column < 4; column++) {
			let sum = column === 3 ? a[row * 4 + 3]! : 0;
			for (let k = 0; k < 3; k++) sum += a[row * 4 + k]! * b[k * 4 + column]!;
			out.push(sum);
		}
	}
	return out;
}

/** The point carried over. */
export function transform(m: Affine, p: Vector3): Vector3 {
	return [
		m[0]! * p[0] + m[1]! * p[1] + m[2]! * p[2] + m[3]!,
		m[4]! * p[0] + m[5]! * p[1] + m[6]! * p[2] + m[7]!,
		m[8]! * p[0] + m[9]! * p[1] + m[10]! * p[2] + m[11]!,
	];
}

/** The same map with its shift in another unit. */
export function scaleShift(m: Affine, factor: number): Affine {
	return m.map((value, at) => (at % 4 === 3 ? value * factor : value));
}

/** From the axes of a right-handed system and its origin, as IfcAxis2Placement3D builds it: Z = axis, X = refDirection made square to it. Null where they are parallel or have no length. */
export function affineFromAxes(origin: Vector3, axis: Vector3, refDirection: Vector3): Affine | null {
	const z = unit(axis);
	if (!z) return null;
	const x = unit(subtract(refDirection, scale(z, dot(refDirection, z))));
	if (!x || lengthOf(subtract(refDirection, scale(z, dot(refDirection, z)))) < 1e-9 * lengthOf(refDirection)) return null;
	const y = cross(z, x);
	return [x[0], y[0], z[0], origin[0], x[1], y[1], z[1], origin[1], x[2], y[2], z[2], origin[2]];
}

/** The largest difference between two maps: of the shifts, and of the turns times `reachM`. */
export function differenceOf(a: Affine, b: Affine, reach: number): number {
	let largest = 0;
	for (let at = 0; at < 12; at++) largest = Math.max(largest, Math.abs(a[at]! - b[at]!) * (at % 4 === 3 ? 1 : reach));
	return largest;
}
