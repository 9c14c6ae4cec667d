/** The least work any program must do on the same input. */

/**
 * Centroids and the 3 × 3 cross-covariance of pairs that stand one after another.
 * @param sums nine numbers, filled: Σ (x − x̄)(y − ȳ)ᵀ, row by row
 */
export function centroidSums(survey: Float64Array, control: Float64Array, from: number, count: number, sums: Float64Array): void {
	const start = 3 * from;
	const end = start + 3 * count;
	let sx = 0;
	let sy = 0;
	let sz = 0;
	let se = 0;
	let sn = 0;
	let sh = 0;
	for (let at = start; at < end; at += 3) {
		sx += survey[at]!;
		sy += survey[at + 1]!;
		sz += survey[at + 2]!;
		se += control[at]!;
		sn += control[at + 1]!;
		sh += control[at + 2]!;
	}
	sx /= count;
	sy /= count;
	sz /= count;
	se /= count;
	sn /= count;
	sh /= count;
	let a = 0;
	let b = 0;
	let c = 0;
	let d = 0;
	let f = 0;
	let g = 0;
	let k = 0;
	let l = 0;
	let m = 0;
	for (let at = start; at < end; at += 3) {
		const x = survey[at]! - sx;
		const y = survey[at + 1]! - sy;
		const z = survey[at + 2]! - sz;
		const e = control[at]! - se;
		const n = control[at + 1]! - sn;
		const h = control[at + 2]! - sh;
		a += x * e;
		b += x * n;
		c += x * h;
		d += y * e;
		f += y * n;
		g += y * h;
		k += z * e;
		l += z * n;
		m += z * h;
	}
	sums[0] = a;
	sums[1] = b;
	sums[2] = c;
	sums[3] = d;
	sums[4] = f;
	sums[5] = g;
	sums[6] = k;
	sums[7] = l;
	sums[8] = m;
}

/** How many of all pairs lie within the tolerance of a pose of triadPose; all are looked at. */
export function countWithin(survey: Float64Array, control: Float64Array, count: number, pose: Float64Array, toleranceM: number): number {
	const square = toleranceM * toleranceM;
	const m0 = pose[0]!;
	const m1 = pose[1]!;
	const m2 = pose[2]!;
	const m3 = pose[3]!;
	const m4 = pose[4]!;
	const m5 = pose[5]!;
	const m6 = pose[6]!;
	const m7 = pose[7]!;
	const m8 = pose[8]!;
	const shiftE = pose[9]!;
	const shiftN = pose[10]!;
	const shiftH = pose[11]!;
	let within = 0;
	for (let at = 0; at < 3 * count; at += 3) {
		const x = survey[at]!;
		const y = survey[at + 1]!;
		const z = survey[at + 2]!;
		const e = m0 * x + m1 * y + m2 * z + shiftE - control[at]!;
		const n = m3 * x + m4 * y + m5 * z + shiftN - control[at + 1]!;
		const h = m6 * x + m7 * y + m8 * z + shiftH - control[at + 2]!;
		if (e * e + n * n + h * h <= square) within++;
	}
	return within;
}
