import { bestTurn } from './best-turn.ts';

/**
 * The free fit of equally good points in closed form, for searches that fit by the thousand: flat arrays in, flat arrays out, nothing allocated.
 * control ≈ rotation·(survey − surveyMean) + controlMean (Horn 1987; Arun, Huang & Blostein 1987).
 */
export interface RigidFit {
	/** Nine numbers, row by row. */
	readonly rotation: Float64Array;
	/** Three numbers each, metres: the centroids. */
	readonly surveyMean: Float64Array;
	readonly controlMean: Float64Array;
	/** Of Σ (x − x̄)(y − ȳ)ᵀ, m², largest first, the third signed (best-turn.ts). */
	readonly singular: Float64Array;
}

export function newRigidFit(): RigidFit {
	return {
		rotation: new Float64Array(9),
		surveyMean: new Float64Array(3),
		controlMean: new Float64Array(3),
		singular: new Float64Array(3),
	};
}

/** Under this share of the largest singular value the second and third leave the turn open: points on a line, or a mirror image as good. */
const LEAST_SHARE = 1e-11;

const cross = new Float64Array(9);

/**
 * Fits `count` pairs that stand one after another in flat arrays, from pair `from` on. Coordinates need not be reduced: sums are taken about
 * the first pair.
 * @param survey 3 numbers a pair, metres
 * @param control likewise
 * @returns false where the turn is not determined: fewer than three points, points in one place or on a line. `fit` then holds no rotation to use
 */
export function fitRigid(survey: Float64Array, control: Float64Array, from: number, count: number, fit: RigidFit): boolean {
	const start = 3 * from;
	const end = start + 3 * count;
	const x0 = survey[start]!;
	const y0 = survey[start + 1]!;
	const z0 = survey[start + 2]!;
	const e0 = control[start]!;
	const n0 = control[start + 1]!;
	const h0 = control[start + 2]!;
	let sx = 0;
	let sy = 0;
	let sz = 0;
	let se = 0;
	let sn = 0;
	let sh = 0;
	let xe = 0;
	let xn = 0;
	let xh = 0;
	let ye = 0;
	let yn = 0;
	let yh = 0;
	let ze = 0;
	let zn = 0;
	let zh = 0;
	for (let at = start + 3; at < end; at += 3) {
		const x = survey[at]! - x0;
		const y = survey[at + 1]! - y0;
		const z = survey[at + 2]! - z0;
		const e = control[at]! - e0;
		const n = control[at + 1]! - n0;
		const h = control[at + 2]! - h0;
		sx += x;
		sy += y;
		sz += z;
		se += e;
		sn += n;
		sh += h;
		xe += x * e;
		xn += x * n;
		xh += x * h;
		ye += y * e;
		yn += y * n;
		yh += y * h;
		ze += z * e;
		zn += z * n;
		zh += z * h;
	}
	const share = 1 / count;
	const mx = sx * share;
	const my = sy * share;
	const mz = sz * share;
	cross[0] = xe - mx * se;
	cross[1] = xn - mx * sn;
	cross[2] = xh - mx * sh;
	cross[3] = ye - my * se;
	cross[4] = yn - my * sn;
	cross[5] = yh - my * sh;
	cross[6] = ze - mz * se;
	cross[7] = zn - mz * sn;
	cross[8] = zh - mz * sh;
	const { surveyMean, controlMean, singular } = fit;
	surveyMean[0] = x0 + mx;
	surveyMean[1] = y0 + my;
	surveyMean[2] = z0 + mz;
	controlMean[0] = e0 + se * share;
	controlMean[1] = n0 + sn * share;
	controlMean[2] = h0 + sh * share;
	bestTurn(cross, fit.rotation, singular);
	return count > 2 && singular[0]! > 0 && singular[1]! + singular[2]! > LEAST_SHARE * singular[0]!;
}
