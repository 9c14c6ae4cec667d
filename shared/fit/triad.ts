/**
 * The pose through three pairs by triads: an axis along the first side and one across the plane, on either side (Horn 1987, section 2.A).
 * Not the least-squares fit of the three, but within their own errors of it, at a fraction of its cost: for searches that try many.
 * @param survey 3 numbers a pair, metres
 * @param control likewise
 * @param pose twelve numbers, filled: the rotation row by row, then the shift that takes centroid to centroid, metres
 * @returns false where three points of a side lie on a line
 */
export function triadPose(survey: Float64Array, control: Float64Array, i: number, j: number, k: number, pose: Float64Array): boolean {
	if (!fillTriad(survey, 3 * i, 3 * j, 3 * k, from) || !fillTriad(control, 3 * i, 3 * j, 3 * k, to)) return false;
	for (let row = 0; row < 3; row++) {
		const a = to[row]!;
		const b = to[3 + row]!;
		const c = to[6 + row]!;
		const x = a * from[0]! + b * from[3]! + c * from[6]!;
		const y = a * from[1]! + b * from[4]! + c * from[7]!;
		const z = a * from[2]! + b * from[5]! + c * from[8]!;
		pose[3 * row] = x;
		pose[3 * row + 1] = y;
		pose[3 * row + 2] = z;
		pose[9 + row] = to[9 + row]! - (x * from[9]! + y * from[10]! + z * from[11]!);
	}
	return true;
}

/** Three axes, one after another, and the centroid. */
const from = new Float64Array(12);
const to = new Float64Array(12);

/** The least sine of the corner at the first point that counts as a triangle. */
const LEAST_SINE = 1e-6;

function fillTriad(points: Float64Array, p: number, q: number, r: number, triad: Float64Array): boolean {
	const x0 = points[p]!;
	const y0 = points[p + 1]!;
	const z0 = points[p + 2]!;
	const ax = points[q]! - x0;
	const ay = points[q + 1]! - y0;
	const az = points[q + 2]! - z0;
	const bx = points[r]! - x0;
	const by = points[r + 1]! - y0;
	const bz = points[r + 2]! - z0;
	const cx = ay * bz - az * by;
	const cy = az * bx - ax * bz;
	const cz = ax * by - ay * bx;
	const side = ax * ax + ay * ay + az * az;
	const area = cx * cx + cy * cy + cz * cz;
	// Written so that a side of no length fails as well.
	if (!(area > LEAST_SINE * LEAST_SINE * side * (bx * bx + by * by + bz * bz))) return false;
	const along = 1 / Math.sqrt(side);
	const across = 1 / Math.sqrt(area);
	const ux = ax * along;
	const uy = ay * along;
	const uz = az * along;
	const wx = cx * across;
	const wy = cy * across;
	const wz = cz * across;
	triad[0] = ux;
	triad[1] = uy;
	triad[2] = uz;
	triad[3] = wy * uz - wz * uy;
	triad[4] = wz * ux - wx * uz;
	triad[5] = wx * uy - wy * ux;
	triad[6] = wx;
	triad[7] = wy;
	triad[8] = wz;
	triad[9] = x0 + (ax + bx) / 3;
	triad[10] = y0 + (ay + by) / 3;
	triad[11] = z0 + (az + bz) / 3;
	return true;
}
