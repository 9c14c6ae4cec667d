import { type Adjustment, adjust, SEARCH_STEPS } from './adjust.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN, pickPairs } from './fit-observations.ts';
import { clonePose, type FitPose, movePose, poseMatrix } from './fit-pose.ts';
import { fullCofactor, pairReliability } from './pair-reliability.ts';
import { solveFit } from './solve-fit.ts';
import { refuseGeometry } from './spread.ts';

export type PartialResidual = [number | null, number | null, number | null];

/** To here, each left-out fit is looked for from scratch; beyond, from the fit of all, which one pair of many cannot move to another valley. */
const FROM_SCRATCH_PAIRS = 12;
/** The second order of the change is taken as nil under this, metres. */
const SECOND_ORDER = 2e-8;

/**
 * The misfit of each pair against a full new fit of all others: fitted minus control, metres, control frame.
 * Null where the others do not determine the fit, or a coordinate is not known.
 */
export function leaveOneOut(observations: FitObservations, adjustment: Adjustment): (PartialResidual | null)[] {
	const cofactor = fullCofactor(adjustment, observations);
	return Array.from({ length: observations.count }, (_, i) => {
		const others = Array.from({ length: observations.count }, (_, k) => k).filter((k) => k !== i);
		if (observations.count <= FROM_SCRATCH_PAIRS) {
			const solution = solveFit(pickPairs(observations, others));
			return solution.ok ? misfitOf(observations, solution.adjustment.pose, i) : null;
		}
		if (refuseGeometry(pickPairs(observations, others))) return null;
		const start = poseWithout(observations, adjustment, cofactor, i);
		if (!start) return null;
		if (start.secondOrder < SECOND_ORDER) return misfitOf(observations, start.pose, i);
		const refit = adjust(observations, start.pose, i, SEARCH_STEPS);
		return refit.state === 'converged' ? misfitOf(observations, refit.pose, i) : null;
	});
}

/**
 * The pose of the fit without pair `i`, from the adjustment's own matrices: the unknowns move by −Q·Aᵀ·Σ⁻¹·e, e = Σ·Q_v⁻¹·r the misfit of the pair
 * that is left out (Cook & Weisberg 1982), exact to first order.
 * @returns null where the pair has no redundancy; `secondOrder`: a bound on what the first order leaves out, metres
 */
function poseWithout(
	observations: FitObservations,
	adjustment: Adjustment,
	cofactor: Float64Array,
	i: number,
): { pose: FitPose; secondOrder: number } | null {
	const { equations, pose } = adjustment;
	const { taken, response } = pairReliability(observations, adjustment, cofactor, i);
	// (I − A·Q·Aᵀ·Σ⁻¹)·e = r, unknown axes left out by a unit row.
	const known = observations.known[i]!;
	const left = taken.map((value, at) => (at % 4 === 0 ? 1 : 0) - value);
	const right = [0, 1, 2].map((k) => ((known & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) === 0 ? 0 : equations.residual[3 * i + k]!));
	const misfit = solve3(left, right);
	if (!misfit) return null;
	const change = new Float64Array(7);
	for (let p = 0; p < 7; p++) for (let k = 0; k < 3; k++) change[p] = change[p]! - response[3 * p + k]! * misfit[k]!;
	const moved = clonePose(pose);
	movePose(moved, change);
	let reach = 0;
	let largest = 0;
	for (let at = 0; at < equations.adjusted.length; at++) {
		reach = Math.max(reach, Math.abs(equations.adjusted[at]!));
		largest = Math.max(largest, Math.abs(equations.residual[at]!));
	}
	const turn = Math.hypot(change[3]!, change[4]!, change[5]!) + Math.abs(change[6]!);
	return { pose: moved, secondOrder: turn * (turn * reach + 3 * largest) };
}

/** Cramer's rule; null where the matrix (nine numbers, row by row) is singular. */
function solve3(m: ArrayLike<number>, right: readonly number[]): [number, number, number] | null {
	const c0 = m[4]! * m[8]! - m[5]! * m[7]!;
	const c1 = m[5]! * m[6]! - m[3]! * m[8]!;
	const c2 = m[3]! * m[7]! - m[4]! * m[6]!;
	const determinant = m[0]! * c0 + m[1]! * c1 + m[2]! * c2;
	if (!(Math.abs(determinant) > 1e-9)) return null;
	const [x, y, z] = right as [number, number, number];
	return [
		(c0 * x + (m[2]! * m[7]! - m[1]! * m[8]!) * y + (m[1]! * m[5]! - m[2]! * m[4]!) * z) / determinant,
		(c1 * x + (m[0]! * m[8]! - m[2]! * m[6]!) * y + (m[2]! * m[3]! - m[0]! * m[5]!) * z) / determinant,
		(c2 * x + (m[1]! * m[6]! - m[0]! * m[7]!) * y + (m[0]! * m[4]! - m[1]! * m[3]!) * z) / determinant,
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
