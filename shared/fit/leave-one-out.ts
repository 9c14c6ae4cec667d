import type { Adjustment } from './adjust.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN, pickPairs } from './fit-observations.ts';
import { type FitPose, poseMatrix } from './fit-pose.ts';
import type { PairReliability } from './pair-reliability.ts';
import { solveFit } from './solve-fit.ts';

export type PartialResidual = [number | null, number | null, number | null];

/** To here, each left-out fit is looked for from scratch; beyond, from the fit of all, which one pair of many cannot move to another valley. */
const FROM_SCRATCH_PAIRS = 12;
/** The second order of the change is taken as nil under this, metres. */
const SECOND_ORDER = 2e-8;
/** How much of the largest residual enters the second order. Measured with this share on sets of 14 to 50 pairs: right to 6e-8 m. */
const SHARE_OF_RESIDUAL = 0.1;
/** Under this the others hardly hold the fit: it is computed anew, with all its tests. */
const LEAST_DETERMINANT = 1e-4;

/**
 * The misfit of each pair against a full new fit of all others: fitted minus control, metres, control frame.
 * Null where the others do not determine the fit, or a coordinate is not known.
 * @param reliability of all pairs, in their order
 */
export function leaveOneOut(
	observations: FitObservations,
	adjustment: Adjustment,
	reliability: readonly PairReliability[],
): (PartialResidual | null)[] {
	const { count, known } = observations;
	const { adjusted, residual } = adjustment.equations;
	let reach = 0;
	let largest = 0;
	for (let at = 0; at < 3 * count; at++) {
		reach = Math.max(reach, Math.abs(adjusted[at]!));
		largest = Math.max(largest, Math.abs(residual[at]!));
	}
	const results: (PartialResidual | null)[] = [];
	for (let i = 0; i < count; i++) {
		const misfit = count > FROM_SCRATCH_PAIRS ? firstOrder(observations, adjustment, reliability[i]!, i, reach, largest) : null;
		if (!misfit) results.push(refitWithout(observations, i));
		else
			results.push([
				known[i]! & KNOWN_PLAN ? misfit[0] : null,
				known[i]! & KNOWN_PLAN ? misfit[1] : null,
				known[i]! & KNOWN_HEIGHT ? misfit[2] : null,
			]);
	}
	return results;
}

function refitWithout(observations: FitObservations, i: number): PartialResidual | null {
	const others = Array.from({ length: observations.count }, (_, k) => k).filter((k) => k !== i);
	const solution = solveFit(pickPairs(observations, others));
	return solution.ok ? misfitOf(observations, solution.adjustment.pose, i) : null;
}

/**
 * From the adjustment's own matrices: the misfit of the pair that is left out is −Σ·Q_v⁻¹·r, and the unknowns move by −Q·Aᵀ·Q_v⁻¹·r
 * (Cook & Weisberg 1982), exact to first order. Null where a bound on the second order is too large, or the others may not determine the fit.
 */
function firstOrder(
	{ known }: FitObservations,
	{ equations }: Adjustment,
	{ taken, response }: PairReliability,
	i: number,
	reach: number,
	largest: number,
): [number, number, number] | null {
	// (I − A·Q·Aᵀ·Σ⁻¹)·e = r; a coordinate that is not known has a unit row and no residual.
	const residual = equations.residual;
	const plan = (known[i]! & KNOWN_PLAN) !== 0 ? 1 : 0;
	const height = (known[i]! & KNOWN_HEIGHT) !== 0 ? 1 : 0;
	const e = solve3(taken, plan * residual[3 * i]!, plan * residual[3 * i + 1]!, height * residual[3 * i + 2]!);
	if (!e) return null;
	let turn = 0;
	for (let p = 3; p < 7; p++) turn += Math.abs(response[3 * p]! * e[0] + response[3 * p + 1]! * e[1] + response[3 * p + 2]! * e[2]);
	return turn * (turn * reach + SHARE_OF_RESIDUAL * largest) < SECOND_ORDER ? [-e[0], -e[1], -e[2]] : null;
}

/** Solves (I − taken)·x = right by Cramer's rule; null where it is nearly singular: the pair holds the fit up. */
function solve3(taken: Float64Array, x: number, y: number, z: number): [number, number, number] | null {
	const [a, b, c] = [1 - taken[0]!, -taken[1]!, -taken[2]!];
	const [d, e, f] = [-taken[3]!, 1 - taken[4]!, -taken[5]!];
	const [g, h, k] = [-taken[6]!, -taken[7]!, 1 - taken[8]!];
	const c0 = e * k - f * h;
	const c1 = f * g - d * k;
	const c2 = d * h - e * g;
	const determinant = a * c0 + b * c1 + c * c2;
	if (!(determinant > LEAST_DETERMINANT)) return null;
	return [
		(c0 * x + (c * h - b * k) * y + (b * f - c * e) * z) / determinant,
		(c1 * x + (a * k - c * g) * y + (c * d - a * f) * z) / determinant,
		(c2 * x + (b * g - a * h) * y + (a * e - b * d) * z) / determinant,
	];
}

/** Fitted minus control of pair `i` at a pose; null on an axis that is not known. */
export function misfitOf(observations: FitObservations, pose: FitPose, i: number): PartialResidual {
	const matrix = new Float64Array(9);
	poseMatrix(pose, matrix);
	const known = observations.known[i]!;
	const misfit: PartialResidual = [null, null, null];
	for (let k = 0; k < 3; k++) {
		if ((known & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) === 0) continue;
		const fitted =
			matrix[3 * k]! * observations.survey[3 * i]! +
			matrix[3 * k + 1]! * observations.survey[3 * i + 1]! +
			matrix[3 * k + 2]! * observations.survey[3 * i + 2]! +
			pose.shift[k]!;
		misfit[k] = fitted - observations.control[3 * i + k]!;
	}
	return misfit;
}
