import { type FitObservations, KNOWN_ALL, KNOWN_PLAN } from './fit-observations.ts';
import { type FitPose, poseMatrix } from './fit-pose.ts';

/**
 * The linearised condition control + v = S·R·(survey + v′) + shift of all pairs at a pose, and its normal equations.
 *
 * Gauss–Helmert (Pope 1972): A is taken at the adjusted survey coordinates x̂ = x + C_survey·(S·R)ᵀ·Σ⁻¹·r, Σ = C_control + S·R·C_survey·(S·R)ᵀ
 * at the pose itself. The gradient of F = Σ rᵀ·Σ⁻¹·r, with Σ moving along, is then exactly −2·Σ Aᵀ·Σ⁻¹·r, so an iteration that
 * stops with AᵀΣ⁻¹r = 0 has found a stationary point of F itself, not of F with Σ held still.
 */
export interface NormalEquations {
	/** 7 × 7, row by row: Σ Aᵀ·Σ⁻¹·A, for all seven small changes. */
	readonly normal: Float64Array;
	/** Σ Aᵀ·Σ⁻¹·r. */
	readonly gradient: Float64Array;
	/** F, without unit with σ. */
	objective: number;
	/** A pair: r = control − fitted (3), S·R·x̂ (3), Σ⁻¹ as xx, xy, xz, yy, yz, zz (6), Σ likewise (6). */
	readonly residual: Float64Array;
	readonly adjusted: Float64Array;
	readonly inverse: Float64Array;
	readonly covariance: Float64Array;
}

export function newNormalEquations(count: number): NormalEquations {
	return {
		normal: new Float64Array(49),
		gradient: new Float64Array(7),
		objective: 0,
		residual: new Float64Array(3 * count),
		adjusted: new Float64Array(3 * count),
		inverse: new Float64Array(6 * count),
		covariance: new Float64Array(6 * count),
	};
}

const matrix = new Float64Array(9);

/**
 * Fills `equations` at `pose`. One pass, no small objects.
 * @returns false where some Σ is singular or a number overflows
 */
export function formNormalEquations(observations: FitObservations, pose: FitPose, equations: NormalEquations): boolean {
	const { count, survey, control, surveyVariance, controlVariance, known, sigmaGiven } = observations;
	const { normal, gradient, residual, adjusted, inverse, covariance } = equations;
	poseMatrix(pose, matrix);
	const m0 = matrix[0]!;
	const m1 = matrix[1]!;
	const m2 = matrix[2]!;
	const m3 = matrix[3]!;
	const m4 = matrix[4]!;
	const m5 = matrix[5]!;
	const m6 = matrix[6]!;
	const m7 = matrix[7]!;
	const m8 = matrix[8]!;
	const shiftE = pose.shift[0]!;
	const shiftN = pose.shift[1]!;
	const shiftH = pose.shift[2]!;
	// Sums of the normal matrix: shift block t, mixed block t×ω (m), turn block ω, scale column.
	let t00 = 0,
		t01 = 0,
		t02 = 0,
		t11 = 0,
		t12 = 0,
		t22 = 0;
	let c00 = 0,
		c01 = 0,
		c02 = 0,
		c10 = 0,
		c11 = 0,
		c12 = 0,
		c20 = 0,
		c21 = 0,
		c22 = 0;
	let o00 = 0,
		o01 = 0,
		o02 = 0,
		o11 = 0,
		o12 = 0,
		o22 = 0;
	let s0 = 0,
		s1 = 0,
		s2 = 0,
		s3 = 0,
		s4 = 0,
		s5 = 0,
		s6 = 0;
	let g0 = 0,
		g1 = 0,
		g2 = 0,
		g3 = 0,
		g4 = 0,
		g5 = 0,
		g6 = 0;
	let objective = 0;
	let sound = true;
	for (let i = 0; i < count; i++) {
		const at = 3 * i;
		const x = survey[at]!;
		const y = survey[at + 1]!;
		const z = survey[at + 2]!;
		let qe = m0 * x + m1 * y + m2 * z;
		let qn = m3 * x + m4 * y + m5 * z;
		let qh = m6 * x + m7 * y + m8 * z;
		let re = control[at]! - qe - shiftE;
		let rn = control[at + 1]! - qn - shiftN;
		let rh = control[at + 2]! - qh - shiftH;
		// The carried survey covariance.
		let ee = 0,
			en = 0,
			eh = 0,
			nn = 0,
			nh = 0,
			hh = 0;
		if (sigmaGiven) {
			const vx = surveyVariance[at]!;
			const vy = surveyVariance[at + 1]!;
			const vz = surveyVariance[at + 2]!;
			const x0 = vx * m0;
			const y0 = vy * m1;
			const z0 = vz * m2;
			const x1 = vx * m3;
			const y1 = vy * m4;
			const z1 = vz * m5;
			ee = x0 * m0 + y0 * m1 + z0 * m2;
			en = x0 * m3 + y0 * m4 + z0 * m5;
			eh = x0 * m6 + y0 * m7 + z0 * m8;
			nn = x1 * m3 + y1 * m4 + z1 * m5;
			nh = x1 * m6 + y1 * m7 + z1 * m8;
			hh = vx * m6 * m6 + vy * m7 * m7 + vz * m8 * m8;
		}
		const a = ee + controlVariance[at]!;
		const d = nn + controlVariance[at + 1]!;
		const f = hh + controlVariance[at + 2]!;
		let w00 = 0,
			w01 = 0,
			w02 = 0,
			w11 = 0,
			w12 = 0,
			w22 = 0;
		const knows = known[i]!;
		if (knows === KNOWN_ALL) {
			const k00 = d * f - nh * nh;
			const k01 = eh * nh - en * f;
			const k02 = en * nh - d * eh;
			const determinant = a * k00 + en * k01 + eh * k02;
			const over = 1 / determinant;
			w00 = k00 * over;
			w01 = k01 * over;
			w02 = k02 * over;
			w11 = (a * f - eh * eh) * over;
			w12 = (en * eh - a * nh) * over;
			w22 = (a * d - en * en) * over;
			if (!(determinant > 1e-14 * a * d * f)) sound = false;
		} else if (knows === KNOWN_PLAN) {
			const determinant = a * d - en * en;
			w00 = d / determinant;
			w01 = -en / determinant;
			w11 = a / determinant;
			rh = 0;
			if (!(determinant > 1e-14 * a * d)) sound = false;
		} else {
			w22 = 1 / f;
			re = 0;
			rn = 0;
			if (!(f > 0)) sound = false;
		}
		const ue = w00 * re + w01 * rn + w02 * rh;
		const un = w01 * re + w11 * rn + w12 * rh;
		const uh = w02 * re + w12 * rn + w22 * rh;
		// S·R·x̂
		qe += ee * ue + en * un + eh * uh;
		qn += en * ue + nn * un + nh * uh;
		qh += eh * ue + nh * un + hh * uh;
		residual[at] = re;
		residual[at + 1] = rn;
		residual[at + 2] = rh;
		adjusted[at] = qe;
		adjusted[at + 1] = qn;
		adjusted[at + 2] = qh;
		const six = 6 * i;
		inverse[six] = w00;
		inverse[six + 1] = w01;
		inverse[six + 2] = w02;
		inverse[six + 3] = w11;
		inverse[six + 4] = w12;
		inverse[six + 5] = w22;
		covariance[six] = a;
		covariance[six + 1] = en;
		covariance[six + 2] = eh;
		covariance[six + 3] = d;
		covariance[six + 4] = nh;
		covariance[six + 5] = f;
		objective += re * ue + rn * un + rh * uh;
		g0 += ue;
		g1 += un;
		g2 += uh;
		g3 += qn * uh - qh * un;
		g4 += qh * ue - qe * uh;
		g5 += qe * un - qn * ue;
		g6 += qe * ue + qn * un + qh * uh;
		t00 += w00;
		t01 += w01;
		t02 += w02;
		t11 += w11;
		t12 += w12;
		t22 += w22;
		// W·K, K = −[q̂]×: column of turn E = (0, −qh, qn), of turn N = (qh, 0, −qe), of turn H = (−qn, qe, 0).
		const k00 = w02 * qn - w01 * qh;
		const k10 = w12 * qn - w11 * qh;
		const k20 = w22 * qn - w12 * qh;
		const k01 = w00 * qh - w02 * qe;
		const k11 = w01 * qh - w12 * qe;
		const k21 = w02 * qh - w22 * qe;
		const k02 = w01 * qe - w00 * qn;
		const k12 = w11 * qe - w01 * qn;
		const k22 = w12 * qe - w02 * qn;
		c00 += k00;
		c01 += k01;
		c02 += k02;
		c10 += k10;
		c11 += k11;
		c12 += k12;
		c20 += k20;
		c21 += k21;
		c22 += k22;
		o00 += qn * k20 - qh * k10;
		o01 += qn * k21 - qh * k11;
		o02 += qn * k22 - qh * k12;
		o11 += qh * k01 - qe * k21;
		o12 += qh * k02 - qe * k22;
		o22 += qe * k12 - qn * k02;
		const v0 = w00 * qe + w01 * qn + w02 * qh;
		const v1 = w01 * qe + w11 * qn + w12 * qh;
		const v2 = w02 * qe + w12 * qn + w22 * qh;
		s0 += v0;
		s1 += v1;
		s2 += v2;
		s3 += qn * v2 - qh * v1;
		s4 += qh * v0 - qe * v2;
		s5 += qe * v1 - qn * v0;
		s6 += qe * v0 + qn * v1 + qh * v2;
	}
	normal[0] = t00;
	normal[1] = t01;
	normal[2] = t02;
	normal[3] = c00;
	normal[4] = c01;
	normal[5] = c02;
	normal[6] = s0;
	normal[8] = t11;
	normal[9] = t12;
	normal[10] = c10;
	normal[11] = c11;
	normal[12] = c12;
	normal[13] = s1;
	normal[16] = t22;
	normal[17] = c20;
	normal[18] = c21;
	normal[19] = c22;
	normal[20] = s2;
	normal[24] = o00;
	normal[25] = o01;
	normal[26] = o02;
	normal[27] = s3;
	normal[32] = o11;
	normal[33] = o12;
	normal[34] = s4;
	normal[40] = o22;
	normal[41] = s5;
	normal[48] = s6;
	for (let row = 1; row < 7; row++) for (let column = 0; column < row; column++) normal[7 * row + column] = normal[7 * column + row]!;
	gradient[0] = g0;
	gradient[1] = g1;
	gradient[2] = g2;
	gradient[3] = g3;
	gradient[4] = g4;
	gradient[5] = g5;
	gradient[6] = g6;
	equations.objective = objective;
	return sound && Number.isFinite(objective);
}
