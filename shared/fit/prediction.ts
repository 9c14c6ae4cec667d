import type { Adjustment } from './adjust.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { poseMatrix } from './fit-pose.ts';
import { fitUnknowns } from './least-pairs.ts';

const matrix = new Float64Array(9);
const rows = new Float64Array(21);
const misfit = new Float64Array(3);
const covariance = new Float64Array(9);

/**
 * How far a pair outside a fit lies from where the fit puts it: dᵀ·(Σ + J·Q·Jᵀ)⁻¹·d over its known axes. Chi-square with as many
 * degrees where the pair is sound; with no σ in units of the variance of unit weight.
 * @param fit an adjustment of other pairs with the same reduced origins
 */
export function prediction(observations: FitObservations, fit: Adjustment, i: number): number {
	predict(observations, fit, i);
	const known = observations.known[i]!;
	const [dx, dy, dz] = [misfit[0]!, misfit[1]!, misfit[2]!];
	let sum = 0;
	let a = covariance[0]!;
	let b = covariance[1]!;
	let d = covariance[4]!;
	let [x, y] = [dx, dy];
	if ((known & KNOWN_HEIGHT) !== 0) {
		const h = covariance[8]!;
		sum = (dz * dz) / h;
		if ((known & KNOWN_PLAN) === 0) return sum;
		// The plan, given the height (one step of Cholesky).
		x -= (covariance[2]! / h) * dz;
		y -= (covariance[5]! / h) * dz;
		a -= (covariance[2]! * covariance[2]!) / h;
		b -= (covariance[2]! * covariance[5]!) / h;
		d -= (covariance[5]! * covariance[5]!) / h;
	}
	return sum + (d * x * x - 2 * b * x * y + a * y * y) / (a * d - b * b);
}

/** The pair's misfit, fitted minus control, over its standard deviation, along E, N, H; null where not known. And the metres. */
export function predictedMisfit(
	observations: FitObservations,
	fit: Adjustment,
	i: number,
): { metres: [number, number, number]; standardised: (number | null)[] } {
	predict(observations, fit, i);
	return {
		metres: [-misfit[0]!, -misfit[1]!, -misfit[2]!],
		standardised: [0, 1, 2].map((k) =>
			(observations.known[i]! & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) === 0 ? null : Math.abs(misfit[k]!) / Math.sqrt(covariance[4 * k]!),
		),
	};
}

/** Fills misfit (control − fitted) and covariance (Σ + J·Q·Jᵀ, nine numbers) of pair i. */
function predict(observations: FitObservations, { pose, cofactor }: Adjustment, i: number): void {
	poseMatrix(pose, matrix);
	const at = 3 * i;
	const { survey, control, surveyVariance, controlVariance } = observations;
	const [x, y, z] = [survey[at]!, survey[at + 1]!, survey[at + 2]!];
	const qe = matrix[0]! * x + matrix[1]! * y + matrix[2]! * z;
	const qn = matrix[3]! * x + matrix[4]! * y + matrix[5]! * z;
	const qh = matrix[6]! * x + matrix[7]! * y + matrix[8]! * z;
	misfit[0] = control[at]! - qe - pose.shift[0]!;
	misfit[1] = control[at + 1]! - qn - pose.shift[1]!;
	misfit[2] = control[at + 2]! - qh - pose.shift[2]!;
	// Rows of design-rows.ts, without an allocation.
	rows.fill(0);
	rows[0] = rows[8] = rows[16] = 1;
	rows[4] = qh;
	rows[5] = -qn;
	rows[6] = qe;
	rows[10] = -qh;
	rows[12] = qe;
	rows[13] = qn;
	rows[17] = qn;
	rows[18] = -qe;
	rows[20] = qh;
	const unknowns = fitUnknowns(observations.kind);
	const size = unknowns.length;
	for (let k = 0; k < 3; k++) {
		for (let l = 0; l <= k; l++) {
			let sum = k === l ? controlVariance[at + k]! : 0;
			for (let m = 0; m < 3; m++) sum += matrix[3 * k + m]! * surveyVariance[at + m]! * matrix[3 * l + m]!;
			for (let p = 0; p < size; p++) {
				const left = rows[7 * k + unknowns[p]!]!;
				if (left === 0) continue;
				for (let q = 0; q < size; q++) sum += left * cofactor[p * size + q]! * rows[7 * l + unknowns[q]!]!;
			}
			covariance[3 * k + l] = sum;
			covariance[3 * l + k] = sum;
		}
	}
}
