import { normalQuantile, twoSidedNormal } from '#shared/geometry/normal-distribution.ts';
import type { Adjustment } from './adjust.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { fitUnknowns } from './least-pairs.ts';
import { LEAST_REDUNDANCY } from './pair-figures.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';

/** α₀ of the test of one residual, and the power with which a blunder of the smallest size is found (Baarda 1968). */
export const PAIR_SIGNIFICANCE = 0.001;
const POWER = 0.8;

/** What a normalised residual is held against: 3.2905. */
export const NORMAL_CRITICAL = twoSidedNormal(PAIR_SIGNIFICANCE);

/** Baarda's δ₀ = 4.13215: the shift of a normalised residual that is found at α₀ = 0.1 % with power 80 %, the far tail counted. */
export const DELTA_0 = noncentrality();

function noncentrality(): number {
	// The near tail alone: the far one adds under 1e-13.
	return NORMAL_CRITICAL + normalQuantile(POWER);
}

/**
 * Redundancy and reliability of one pair, along the axes of the control frame.
 * @param redundancy trace of I − A·Q·Aᵀ·Σ⁻¹ over the known axes
 * @param standardised |r|/σ_v on each axis, null where the axis is unknown or has no redundancy; with no σ not yet over σ̂₀
 * @param smallestBlunder δ₀/√((Σ⁻¹·Q_v·Σ⁻¹)_kk), metres, null where no such blunder would show
 * @param response 7 × 3, row by row: what one metre of error on a control axis does to the unknowns, Q·Aᵀ·Σ⁻¹
 */
export interface PairReliability {
	redundancy: number;
	residualVariance: [number, number, number];
	standardised: [number | null, number | null, number | null];
	smallestBlunder: [number | null, number | null, number | null];
	response: Float64Array;
	/** A·Q·Aᵀ·Σ⁻¹, nine numbers, row by row. */
	taken: Float64Array;
}

/** Q on all seven small changes, 7 × 7; rows of changes that the fit has not are 0. */
export function fullCofactor(adjustment: Adjustment, observations: FitObservations): Float64Array {
	const unknowns = fitUnknowns(observations.kind);
	const full = new Float64Array(49);
	unknowns.forEach((row, i) => {
		unknowns.forEach((column, j) => {
			full[7 * row + column] = adjustment.cofactor[i * unknowns.length + j]!;
		});
	});
	return full;
}

// Scratch: a pair's figures are wanted by the ten thousand.
const design = new Float64Array(21);
const inverse = new Float64Array(9);
const covariance = new Float64Array(9);
const carried = new Float64Array(21);
const fitted = new Float64Array(9);
const ofResidual = new Float64Array(9);

/**
 * Figures of pair `i` (Baarda 1968; Mikhail & Gracie 1981; Pope 1976), A at the adjusted coordinates.
 * @param cofactor of fullCofactor
 */
export function pairReliability(
	observations: FitObservations,
	{ equations }: Adjustment,
	cofactor: Float64Array,
	i: number,
): PairReliability {
	const { adjusted } = equations;
	const at = 6 * sigmaGroupsOf(observations).groupOf[i]!;
	fillDesign(adjusted[3 * i]!, adjusted[3 * i + 1]!, adjusted[3 * i + 2]!);
	fillSymmetric(inverse, equations.inverse, at);
	fillSymmetric(covariance, equations.covariance, at);
	// Q·Aᵀ, 7 × 3.
	for (let p = 0; p < 7; p++) {
		for (let k = 0; k < 3; k++) {
			let sum = cofactor[7 * p + k]!;
			for (let q = 3; q < 7; q++) sum += cofactor[7 * p + q]! * design[7 * k + q]!;
			carried[3 * p + k] = sum;
		}
	}
	for (let k = 0; k < 3; k++) {
		for (let l = 0; l < 3; l++) {
			let sum = carried[3 * k + l]!;
			for (let p = 3; p < 7; p++) sum += design[7 * k + p]! * carried[3 * p + l]!;
			fitted[3 * k + l] = sum;
			ofResidual[3 * k + l] = covariance[3 * k + l]! - sum;
		}
	}
	const response = new Float64Array(21);
	for (let p = 0; p < 7; p++) {
		const [x, y, z] = [carried[3 * p]!, carried[3 * p + 1]!, carried[3 * p + 2]!];
		for (let k = 0; k < 3; k++) response[3 * p + k] = x * inverse[k]! + y * inverse[3 + k]! + z * inverse[6 + k]!;
	}
	const result: PairReliability = {
		redundancy: 0,
		residualVariance: [0, 0, 0],
		standardised: [null, null, null],
		smallestBlunder: [null, null, null],
		response,
		taken: new Float64Array(9),
	};
	for (let k = 0; k < 3; k++) {
		if ((observations.known[i]! & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) === 0) continue;
		for (let m = 0; m < 3; m++) {
			let sum = 0;
			for (let l = 0; l < 3; l++) sum += fitted[3 * k + l]! * inverse[3 * l + m]!;
			result.taken[3 * k + m] = sum;
		}
		result.redundancy += 1 - result.taken[4 * k]!;
		const variance = ofResidual[4 * k]!;
		if (variance > LEAST_REDUNDANCY * covariance[4 * k]!) {
			result.residualVariance[k] = variance;
			result.standardised[k] = Math.abs(equations.residual[3 * i + k]!) / Math.sqrt(variance);
		}
		let detect = 0;
		for (let l = 0; l < 3; l++) for (let m = 0; m < 3; m++) detect += inverse[3 * k + l]! * ofResidual[3 * l + m]! * inverse[3 * m + k]!;
		if (detect > LEAST_REDUNDANCY * inverse[4 * k]!) result.smallestBlunder[k] = DELTA_0 / Math.sqrt(detect);
	}
	return result;
}

/** Rows of design-rows.ts into scratch. The first three columns are the unit matrix and never read. */
function fillDesign(qe: number, qn: number, qh: number): void {
	design[4] = qh;
	design[5] = -qn;
	design[6] = qe;
	design[10] = -qh;
	design[12] = qe;
	design[13] = qn;
	design[17] = qn;
	design[18] = -qe;
	design[20] = qh;
}

/** xx, xy, xz, yy, yz, zz from `at` on as nine numbers, row by row. */
function fillSymmetric(out: Float64Array, six: Float64Array, at: number): void {
	out[0] = six[at]!;
	out[1] = out[3] = six[at + 1]!;
	out[2] = out[6] = six[at + 2]!;
	out[4] = six[at + 3]!;
	out[5] = out[7] = six[at + 4]!;
	out[8] = six[at + 5]!;
}
