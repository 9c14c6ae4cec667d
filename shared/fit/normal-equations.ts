import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { type FitPose, poseMatrix } from './fit-pose.ts';
import { fillPairSigma, newPairSigma } from './pair-sigma.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';

/**
 * The linearised condition control + v = S·R·(survey + v′) + shift of all pairs at a pose, and its normal equations.
 *
 * Gauss–Helmert (Pope 1972): A is taken at the adjusted survey coordinates x̂ = x + C_survey·(S·R)ᵀ·Σ⁻¹·r, Σ = C_control + S·R·C_survey·(S·R)ᵀ
 * at the pose itself. The gradient of F = Σ rᵀ·Σ⁻¹·r, with Σ moving along, is then exactly −2·Σ Aᵀ·Σ⁻¹·r, so an iteration that
 * stops with AᵀΣ⁻¹r = 0 has found a stationary point of F itself, not of F with Σ held still.
 *
 * Σ is the same for all pairs of the same σ (sigma-groups.ts), and A is linear in the adjusted coordinates q̂. So of each group only the sums of
 * q̂, q̂q̂ᵀ, r, q̂rᵀ, rrᵀ are formed pair by pair, and AᵀΣ⁻¹A, AᵀΣ⁻¹r and rᵀΣ⁻¹r once from them.
 */
export interface NormalEquations {
	/** 7 × 7, row by row: Σ Aᵀ·Σ⁻¹·A, for all seven small changes. */
	readonly normal: Float64Array;
	/** Σ Aᵀ·Σ⁻¹·r. */
	readonly gradient: Float64Array;
	/** F, without unit with σ. */
	objective: number;
	/** A pair: r = control − fitted (3), S·R·x̂ (3). Arrays may be longer than the pairs need. */
	readonly residual: Float64Array;
	readonly adjusted: Float64Array;
	/** A group of sigmaGroupsOf: Σ⁻¹ as xx, xy, xz, yy, yz, zz (6), Σ likewise (6). */
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
/** Of one group. */
const own = newPairSigma();
const { sigma, carried, weight } = own;

/**
 * Fills `equations` at `pose`. One pass, no small objects.
 * @returns false where some Σ is singular or a number overflows
 */
export function formNormalEquations(observations: FitObservations, pose: FitPose, equations: NormalEquations): boolean {
	const { survey, control } = observations;
	const { normal, gradient, residual, adjusted, inverse, covariance } = equations;
	const { order, ends } = sigmaGroupsOf(observations);
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
	// Plain loops: a call of fill costs as much as ten pairs.
	for (let k = 0; k < 49; k++) normal[k] = 0;
	for (let k = 0; k < 7; k++) gradient[k] = 0;
	let objective = 0;
	let sound = true;
	let begin = 0;
	for (let group = 0; group < ends.length; group++) {
		const end = ends[group]!;
		if (!fillPairSigma(observations, order[begin]!, matrix, own)) sound = false;
		const w0 = weight[0]!;
		const w1 = weight[1]!;
		const w2 = weight[2]!;
		const w3 = weight[3]!;
		const w4 = weight[4]!;
		const w5 = weight[5]!;
		for (let k = 0; k < 6; k++) {
			inverse[6 * group + k] = weight[k]!;
			covariance[6 * group + k] = sigma[k]!;
		}
		// S·R·C·(S·R)ᵀ·Σ⁻¹: what of a residual goes to the survey side.
		const c0 = carried[0]!;
		const c1 = carried[1]!;
		const c2 = carried[2]!;
		const c3 = carried[3]!;
		const c4 = carried[4]!;
		const c5 = carried[5]!;
		const b0 = c0 * w0 + c1 * w1 + c2 * w2;
		const b1 = c0 * w1 + c1 * w3 + c2 * w4;
		const b2 = c0 * w2 + c1 * w4 + c2 * w5;
		const b3 = c1 * w0 + c3 * w1 + c4 * w2;
		const b4 = c1 * w1 + c3 * w3 + c4 * w4;
		const b5 = c1 * w2 + c3 * w4 + c4 * w5;
		const b6 = c2 * w0 + c4 * w1 + c5 * w2;
		const b7 = c2 * w1 + c4 * w3 + c5 * w4;
		const b8 = c2 * w2 + c4 * w4 + c5 * w5;
		const known = observations.known[order[begin]!]!;
		const plan = (known & KNOWN_PLAN) !== 0 ? 1 : 0;
		const height = (known & KNOWN_HEIGHT) !== 0 ? 1 : 0;
		let qe = 0;
		let qn = 0;
		let qh = 0;
		let ee = 0;
		let en = 0;
		let eh = 0;
		let nn = 0;
		let nh = 0;
		let hh = 0;
		let re = 0;
		let rn = 0;
		let rh = 0;
		let z0 = 0;
		let z1 = 0;
		let z2 = 0;
		let z3 = 0;
		let z4 = 0;
		let z5 = 0;
		let z6 = 0;
		let z7 = 0;
		let z8 = 0;
		let r0 = 0;
		let r1 = 0;
		let r2 = 0;
		let r3 = 0;
		let r4 = 0;
		let r5 = 0;
		for (let place = begin; place < end; place++) {
			const at = 3 * order[place]!;
			const x = survey[at]!;
			const y = survey[at + 1]!;
			const z = survey[at + 2]!;
			let e = m0 * x + m1 * y + m2 * z;
			let n = m3 * x + m4 * y + m5 * z;
			let h = m6 * x + m7 * y + m8 * z;
			const de = plan * (control[at]! - e - shiftE);
			const dn = plan * (control[at + 1]! - n - shiftN);
			const dh = height * (control[at + 2]! - h - shiftH);
			e += b0 * de + b1 * dn + b2 * dh;
			n += b3 * de + b4 * dn + b5 * dh;
			h += b6 * de + b7 * dn + b8 * dh;
			residual[at] = de;
			residual[at + 1] = dn;
			residual[at + 2] = dh;
			adjusted[at] = e;
			adjusted[at + 1] = n;
			adjusted[at + 2] = h;
			qe += e;
			qn += n;
			qh += h;
			ee += e * e;
			en += e * n;
			eh += e * h;
			nn += n * n;
			nh += n * h;
			hh += h * h;
			re += de;
			rn += dn;
			rh += dh;
			z0 += e * de;
			z1 += e * dn;
			z2 += e * dh;
			z3 += n * de;
			z4 += n * dn;
			z5 += n * dh;
			z6 += h * de;
			z7 += h * dn;
			z8 += h * dh;
			r0 += de * de;
			r1 += de * dn;
			r2 += de * dh;
			r3 += dn * dn;
			r4 += dn * dh;
			r5 += dh * dh;
		}
		const members = end - begin;
		begin = end;
		objective += w0 * r0 + w3 * r3 + w5 * r5 + 2 * (w1 * r1 + w2 * r2 + w4 * r4);
		// Σ q̂·uᵀ with u = Σ⁻¹·r, of which the turns take the odd part and the scale the trace.
		gradient[0]! += w0 * re + w1 * rn + w2 * rh;
		gradient[1]! += w1 * re + w3 * rn + w4 * rh;
		gradient[2]! += w2 * re + w4 * rn + w5 * rh;
		const en_ = z0 * w1 + z1 * w3 + z2 * w4;
		const eh_ = z0 * w2 + z1 * w4 + z2 * w5;
		const ne_ = z3 * w0 + z4 * w1 + z5 * w2;
		const nh_ = z3 * w2 + z4 * w4 + z5 * w5;
		const he_ = z6 * w0 + z7 * w1 + z8 * w2;
		const hn_ = z6 * w1 + z7 * w3 + z8 * w4;
		gradient[3]! += nh_ - hn_;
		gradient[4]! += he_ - eh_;
		gradient[5]! += en_ - ne_;
		gradient[6]! += z0 * w0 + z1 * w1 + z2 * w2 + z3 * w1 + z4 * w3 + z5 * w4 + z6 * w2 + z7 * w4 + z8 * w5;
		normal[0]! += members * w0;
		normal[1]! += members * w1;
		normal[2]! += members * w2;
		normal[8]! += members * w3;
		normal[9]! += members * w4;
		normal[16]! += members * w5;
		// Σ⁻¹·K, K = −[q̂]×: column of turn E = (0, −qh, qn), of turn N = (qh, 0, −qe), of turn H = (−qn, qe, 0).
		normal[3]! += w2 * qn - w1 * qh;
		normal[4]! += w0 * qh - w2 * qe;
		normal[5]! += w1 * qe - w0 * qn;
		normal[10]! += w4 * qn - w3 * qh;
		normal[11]! += w1 * qh - w4 * qe;
		normal[12]! += w3 * qe - w1 * qn;
		normal[17]! += w5 * qn - w4 * qh;
		normal[18]! += w2 * qh - w5 * qe;
		normal[19]! += w4 * qe - w2 * qn;
		normal[6]! += w0 * qe + w1 * qn + w2 * qh;
		normal[13]! += w1 * qe + w3 * qn + w4 * qh;
		normal[20]! += w2 * qe + w4 * qn + w5 * qh;
		// Kᵀ·Σ⁻¹·K and the scale.
		normal[24]! += w5 * nn - 2 * w4 * nh + w3 * hh;
		normal[25]! += w2 * nh - w5 * en - w1 * hh + w4 * eh;
		normal[26]! += w4 * en - w2 * nn - w3 * eh + w1 * nh;
		normal[32]! += w0 * hh - 2 * w2 * eh + w5 * ee;
		normal[33]! += w1 * eh - w0 * nh - w4 * ee + w2 * en;
		normal[40]! += w3 * ee - 2 * w1 * en + w0 * nn;
		normal[27]! += w2 * en + w4 * nn + w5 * nh - w1 * eh - w3 * nh - w4 * hh;
		normal[34]! += w0 * eh + w1 * nh + w2 * hh - w2 * ee - w4 * en - w5 * eh;
		normal[41]! += w1 * ee + w3 * en + w4 * eh - w0 * en - w1 * nn - w2 * nh;
		normal[48]! += w0 * ee + w3 * nn + w5 * hh + 2 * (w1 * en + w2 * eh + w4 * nh);
	}
	for (let row = 1; row < 7; row++) for (let column = 0; column < row; column++) normal[7 * row + column] = normal[7 * column + row]!;
	equations.objective = objective;
	return sound && Number.isFinite(objective);
}
