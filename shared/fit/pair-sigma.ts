import { type FitObservations, KNOWN_ALL, KNOWN_PLAN } from './fit-observations.ts';

/** Of a pair at a pose, xx, xy, xz, yy, yz, zz each, control frame: Σ, what of it is carried from the survey side, and Σ⁻¹. m², m⁻². */
export interface PairSigma {
	readonly sigma: Float64Array;
	readonly carried: Float64Array;
	readonly weight: Float64Array;
}

export function newPairSigma(): PairSigma {
	return { sigma: new Float64Array(6), carried: new Float64Array(6), weight: new Float64Array(6) };
}

/**
 * Fills Σ, Σ⁻¹ and the carried covariance of pair i; Σ⁻¹ has zeros on axes that are not known.
 * @param matrix S·R, row by row
 * @returns false where Σ is singular
 */
export function fillPairSigma(
	{ surveyVariance, controlVariance, known, sigmaGiven }: FitObservations,
	i: number,
	matrix: Float64Array,
	{ sigma, carried, weight }: PairSigma,
): boolean {
	let ee = 0;
	let en = 0;
	let eh = 0;
	let nn = 0;
	let nh = 0;
	let hh = 0;
	if (sigmaGiven) {
		for (let k = 0; k < 3; k++) {
			const variance = surveyVariance[3 * i + k]!;
			const e = matrix[k]!;
			const n = matrix[3 + k]!;
			const h = matrix[6 + k]!;
			const ve = variance * e;
			const vn = variance * n;
			ee += ve * e;
			en += ve * n;
			eh += ve * h;
			nn += vn * n;
			nh += vn * h;
			hh += variance * h * h;
		}
	}
	carried[0] = ee;
	carried[1] = en;
	carried[2] = eh;
	carried[3] = nn;
	carried[4] = nh;
	carried[5] = hh;
	const a = ee + controlVariance[3 * i]!;
	const b = en;
	const c = eh;
	const d = nn + controlVariance[3 * i + 1]!;
	const e = nh;
	const f = hh + controlVariance[3 * i + 2]!;
	sigma[0] = a;
	sigma[1] = b;
	sigma[2] = c;
	sigma[3] = d;
	sigma[4] = e;
	sigma[5] = f;
	for (let k = 0; k < 6; k++) weight[k] = 0;
	const knows = known[i]!;
	if (knows === KNOWN_ALL) {
		const k0 = d * f - e * e;
		const k1 = c * e - b * f;
		const k2 = b * e - d * c;
		const determinant = a * k0 + b * k1 + c * k2;
		const over = 1 / determinant;
		weight[0] = k0 * over;
		weight[1] = k1 * over;
		weight[2] = k2 * over;
		weight[3] = (a * f - c * c) * over;
		weight[4] = (b * c - a * e) * over;
		weight[5] = (a * d - b * b) * over;
		return determinant > 1e-14 * a * d * f;
	}
	if (knows === KNOWN_PLAN) {
		const determinant = a * d - b * b;
		weight[0] = d / determinant;
		weight[1] = -b / determinant;
		weight[3] = a / determinant;
		return determinant > 1e-14 * a * d;
	}
	weight[5] = 1 / f;
	return f > 0;
}
