import { normalQuantile, twoSidedNormal } from '#shared/geometry/normal-distribution.ts';
import type { Adjustment } from './adjust.ts';
import { designRows } from './design-rows.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { fitUnknowns } from './least-pairs.ts';

/** α₀ of the test of one residual, and the power with which a blunder of the smallest size is found (Baarda 1968). */
export const PAIR_SIGNIFICANCE = 0.001;
const POWER = 0.8;

/** What a normalised residual is held against: 3.2905. */
export const NORMAL_CRITICAL = twoSidedNormal(PAIR_SIGNIFICANCE);

/** Baarda's δ₀ = 4.13215: the shift of a normalised residual that is found at α₀ = 0.1 % with power 80 %, the far tail counted. */
export const DELTA_0 = noncentrality();

/** An axis with less redundancy than this counts as none. */
const LEAST_REDUNDANCY = 1e-9;

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
	const design = designRows(equations.adjusted[3 * i]!, equations.adjusted[3 * i + 1]!, equations.adjusted[3 * i + 2]!);
	const inverse = symmetricAt(equations.inverse, i);
	const covariance = symmetricAt(equations.covariance, i);
	// Q·Aᵀ, 7 × 3.
	const carried = new Float64Array(21);
	for (let p = 0; p < 7; p++) {
		for (let k = 0; k < 3; k++) {
			let sum = 0;
			for (let q = 0; q < 7; q++) sum += cofactor[7 * p + q]! * design[7 * k + q]!;
			carried[3 * p + k] = sum;
		}
	}
	const fitted = new Float64Array(9);
	for (let k = 0; k < 3; k++) {
		for (let l = 0; l < 3; l++) {
			let sum = 0;
			for (let p = 0; p < 7; p++) sum += design[7 * k + p]! * carried[3 * p + l]!;
			fitted[3 * k + l] = sum;
		}
	}
	const ofResidual = covariance.map((value, at) => value - fitted[at]!);
	const response = new Float64Array(21);
	for (let p = 0; p < 7; p++) {
		for (let k = 0; k < 3; k++) {
			response[3 * p + k] = carried[3 * p]! * inverse[k]! + carried[3 * p + 1]! * inverse[3 + k]! + carried[3 * p + 2]! * inverse[6 + k]!;
		}
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

/** xx, xy, xz, yy, yz, zz of pair i as nine numbers, row by row. */
function symmetricAt(six: Float64Array, i: number): Float64Array {
	const at = 6 * i;
	return Float64Array.of(
		six[at]!,
		six[at + 1]!,
		six[at + 2]!,
		six[at + 1]!,
		six[at + 3]!,
		six[at + 4]!,
		six[at + 2]!,
		six[at + 4]!,
		six[at + 5]!,
	);
}
