import { type FitObservations, KNOWN_ALL, KNOWN_PLAN } from './fit-observations.ts';
import { type FitPose, poseMatrix } from './fit-pose.ts';

const matrix = new Float64Array(9);

/**
 * What a step of the iteration needs of formNormalEquations and no more: F and Σ Aᵀ·Σ⁻¹·r at `pose`, in a third of the work.
 * Σ⁻¹·r is solved for where formNormalEquations inverts Σ.
 * @param gradient seven numbers, filled
 * @returns F; not a number where some Σ is singular or a number overflows
 */
export function formGradient(observations: FitObservations, pose: FitPose, gradient: Float64Array): number {
	const { count, survey, control, surveyVariance, controlVariance, known, sigmaGiven } = observations;
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
	let g0 = 0;
	let g1 = 0;
	let g2 = 0;
	let g3 = 0;
	let g4 = 0;
	let g5 = 0;
	let g6 = 0;
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
		let ee = 0;
		let en = 0;
		let eh = 0;
		let nn = 0;
		let nh = 0;
		let hh = 0;
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
		let ue = 0;
		let un = 0;
		let uh = 0;
		const knows = known[i]!;
		if (knows === KNOWN_ALL) {
			const k00 = d * f - nh * nh;
			const k01 = eh * nh - en * f;
			const k02 = en * nh - d * eh;
			const k12 = en * eh - a * nh;
			const determinant = a * k00 + en * k01 + eh * k02;
			const over = 1 / determinant;
			ue = (k00 * re + k01 * rn + k02 * rh) * over;
			un = (k01 * re + (a * f - eh * eh) * rn + k12 * rh) * over;
			uh = (k02 * re + k12 * rn + (a * d - en * en) * rh) * over;
			if (!(determinant > 1e-14 * a * d * f)) sound = false;
		} else if (knows === KNOWN_PLAN) {
			const determinant = a * d - en * en;
			ue = (d * re - en * rn) / determinant;
			un = (a * rn - en * re) / determinant;
			rh = 0;
			if (!(determinant > 1e-14 * a * d)) sound = false;
		} else {
			uh = rh / f;
			re = 0;
			rn = 0;
			if (!(f > 0)) sound = false;
		}
		// S·R·x̂
		qe += ee * ue + en * un + eh * uh;
		qn += en * ue + nn * un + nh * uh;
		qh += eh * ue + nh * un + hh * uh;
		objective += re * ue + rn * un + rh * uh;
		g0 += ue;
		g1 += un;
		g2 += uh;
		g3 += qn * uh - qh * un;
		g4 += qh * ue - qe * uh;
		g5 += qe * un - qn * ue;
		g6 += qe * ue + qn * un + qh * uh;
	}
	gradient[0] = g0;
	gradient[1] = g1;
	gradient[2] = g2;
	gradient[3] = g3;
	gradient[4] = g4;
	gradient[5] = g5;
	gradient[6] = g6;
	return sound ? objective : Number.NaN;
}
