import type { Adjustment } from './adjust.ts';
import { type FitObservations, KNOWN_ALL, KNOWN_HEIGHT, KNOWN_PLAN, pickPairs } from './fit-observations.ts';
import { type FitPose, poseMatrix } from './fit-pose.ts';
import { fitUnknowns } from './least-pairs.ts';
import type { PairFigures } from './pair-figures.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';
import { solveFit } from './solve-fit.ts';

export type PartialResidual = [number | null, number | null, number | null];

/** To here, each left-out fit is looked for from scratch; beyond, from the fit of all, which one pair of many cannot move to another valley. */
const FROM_SCRATCH_PAIRS = 12;
/**
 * The second order is estimated as turn·(turn·reach + typical residual), turn the change of all turns and of the scale. Measured on 300 sets of
 * 13 to 100 pairs, all kinds, 4 to 30 m, errors of 1 to 100 σ: what the first order is off by was at most 0.88 of that.
 */
const SHARE_OF_ESTIMATE = 0.8;
const pull = new Float64Array(7);

/** Under this the others hardly hold the fit: it is computed anew, with all its tests. */
const LEAST_DETERMINANT = 1e-4;

/**
 * The misfit of each pair against a full new fit of all others: fitted minus control, metres, control frame.
 *
 * From the adjustment's own matrices wherever the first order is exact enough: the misfit is −Σ·Q_v⁻¹·r, Q_v = Σ − A·Q·Aᵀ (Cook & Weisberg 1982).
 * @param figures of fillPairFigures for this adjustment
 * @param misfits 3 numbers a pair, filled; not a number where the others do not determine the fit, or a coordinate is not known
 * @param exactM how far a misfit may be from that of a refit, metres: pairs of which less can be said are fitted anew
 */
export function fillLeaveOneOut(
	observations: FitObservations,
	adjustment: Adjustment,
	figures: PairFigures,
	misfits: Float64Array,
	exactM = 1e-6,
): void {
	const { count, known } = observations;
	const { equations, cofactor } = adjustment;
	const { adjusted, residual, covariance } = equations;
	const { fitted } = figures;
	const { groupOf } = sigmaGroupsOf(observations);
	const unknowns = fitUnknowns(observations.kind);
	let reach = 0;
	let square = 0;
	for (let at = 0; at < 3 * count; at++) {
		const far = Math.abs(adjusted[at]!);
		if (far > reach) reach = far;
		square += residual[at]! * residual[at]!;
	}
	const typical = Math.sqrt(square / count);
	// A bound on the turns and the scale by the Cauchy–Schwarz inequality: |δ_p| ≤ √Q_pp·√(xᵀ·A·Q·Aᵀ·x), x = Q_v⁻¹·r.
	let turning = 0;
	for (let p = 0; p < unknowns.length; p++) if (unknowns[p]! > 2) turning += Math.sqrt(cofactor[p * unknowns.length + p]!);
	for (let i = 0; i < count; i++) {
		const at = 3 * i;
		const six = 6 * i;
		const own = 6 * groupOf[i]!;
		const sa = covariance[own]!;
		const sb = covariance[own + 1]!;
		const sc = covariance[own + 2]!;
		const sd = covariance[own + 3]!;
		const se = covariance[own + 4]!;
		const sf = covariance[own + 5]!;
		const re = residual[at]!;
		const rn = residual[at + 1]!;
		const rh = residual[at + 2]!;
		const a = sa - fitted[six]!;
		const b = sb - fitted[six + 1]!;
		const c = sc - fitted[six + 2]!;
		const d = sd - fitted[six + 3]!;
		const e = se - fitted[six + 4]!;
		const f = sf - fitted[six + 5]!;
		const k0 = d * f - e * e;
		const k1 = c * e - b * f;
		const k2 = b * e - c * d;
		const determinant = a * k0 + b * k1 + c * k2;
		const over = 1 / determinant;
		const k4 = b * c - a * e;
		const x = (k0 * re + k1 * rn + k2 * rh) * over;
		const y = (k1 * re + (a * f - c * c) * rn + k4 * rh) * over;
		const z = (k2 * re + k4 * rn + (a * d - b * b) * rh) * over;
		const misfitE = sa * x + sb * y + sc * z;
		const misfitN = sb * x + sd * y + se * z;
		const misfitH = sc * x + se * y + sf * z;
		const bound = turning * Math.sqrt(Math.abs(x * (misfitE - re) + y * (misfitN - rn) + z * (misfitH - rh)));
		const isExact =
			count > FROM_SCRATCH_PAIRS &&
			known[i] === KNOWN_ALL &&
			// The determinant of Q_v over that of Σ.
			determinant > LEAST_DETERMINANT * (sa * (sd * sf - se * se) - sb * (sb * sf - sc * se) + sc * (sb * se - sc * sd)) &&
			(isWithin(bound, reach, typical, exactM) || isWithin(turnWithout(observations, adjustment, i, x, y, z), reach, typical, exactM));
		misfits[at] = -misfitE;
		misfits[at + 1] = -misfitN;
		misfits[at + 2] = -misfitH;
		if (!isExact) refitWithout(observations, i, misfits);
	}
}

/** The second order of a change by `turn`: the turn itself, and what the residuals of the others add to the second derivatives. */
function isWithin(turn: number, reach: number, typical: number, exactM: number): boolean {
	return turn * (turn * reach + typical) < SHARE_OF_ESTIMATE * exactM;
}

/** By how much the turns and the scale change once pair i is left out, added up: δ = Q·Aᵀ·x, x = Q_v⁻¹·r. */
function turnWithout({ kind }: FitObservations, { equations, cofactor }: Adjustment, i: number, x: number, y: number, z: number): number {
	const unknowns = fitUnknowns(kind);
	const size = unknowns.length;
	const e = equations.adjusted[3 * i]!;
	const n = equations.adjusted[3 * i + 1]!;
	const h = equations.adjusted[3 * i + 2]!;
	pull[0] = x;
	pull[1] = y;
	pull[2] = z;
	pull[3] = n * z - h * y;
	pull[4] = h * x - e * z;
	pull[5] = e * y - n * x;
	pull[6] = e * x + n * y + h * z;
	let turn = 0;
	for (let p = 0; p < size; p++) {
		if (unknowns[p]! < 3) continue;
		let change = 0;
		for (let q = 0; q < size; q++) change += cofactor[p * size + q]! * pull[unknowns[q]!]!;
		turn += Math.abs(change);
	}
	return turn;
}

function refitWithout(observations: FitObservations, i: number, misfits: Float64Array): void {
	const others = Array.from({ length: observations.count }, (_, k) => k).filter((k) => k !== i);
	const solution = solveFit(pickPairs(observations, others));
	const misfit = solution.ok ? misfitOf(observations, solution.adjustment.pose, i) : null;
	for (let k = 0; k < 3; k++) misfits[3 * i + k] = misfit?.[k] ?? Number.NaN;
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
