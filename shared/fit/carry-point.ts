import type { Matrix3, Vector3 } from '#shared/geometry/frame.ts';
import { studentTwoSided } from '#shared/geometry/student-t.ts';
import { designRows } from './design-rows.ts';
import type { FitResult } from './fit-schema.ts';
import { fitUnknowns } from './least-pairs.ts';

/** Carries points and their uncertainty over with a stored fit. The fit need not be computed again. */

/** The probability inside k = 2 of a normal value, which Student's factor matches: 95.45 %. */
const COVERAGE = 0.9544997361036416;

/**
 * Where the fit puts a survey point: control frame, metres. A height fit carries the height alone and leaves x and y as they are.
 * @param surveyPoint survey frame, metres
 */
export function carryPoint(fit: FitResult, surveyPoint: Vector3): Vector3 {
	const [e, n, h] = carriedDifference(fit, surveyPoint);
	const [shiftE, shiftN, shiftH] = shiftOf(fit);
	return [e + shiftE, n + shiftN, h + shiftH];
}

/**
 * Covariance of a carried place from the fit alone: J·Q·Jᵀ, m², control frame, without the point's own error (GUM, JCGM 100, 5.1).
 * With no σ it is scaled by σ̂₀²; where there is no redundancy either it is not known: infinite variances, as coverageFactor is null.
 * @param surveyPoint survey frame, metres
 */
export function fitCovarianceAt(fit: FitResult, surveyPoint: Vector3): Matrix3 {
	return fitCovarianceBetween(fit, surveyPoint, surveyPoint);
}

/** Another fit made together with the first one. @param covariance of its unknowns: rows those of the first fit, columns its own */
export interface TiedFit {
	fit: FitResult;
	covariance: readonly (readonly number[])[];
}

/**
 * Covariance between two carried places p and q: J_p·Q·J_qᵀ, m², control frame. For anything derived from two places:
 * cov(p − q) = C(p,p) + C(q,q) − C(p,q) − C(q,p).
 * @param tied where q was measured from another set-up of the same adjustment: its fit and the block of Q between both
 */
export function fitCovarianceBetween(fit: FitResult, surveyPointP: Vector3, surveyPointQ: Vector3, tied?: TiedFit): Matrix3 {
	const other = tied?.fit ?? fit;
	const covariance = tied?.covariance ?? fit.parameterCovariance;
	const [unknownsP, unknownsQ] = [fitUnknowns(fit.fit), fitUnknowns(other.fit)];
	const p = designRows(...carriedDifference(fit, surveyPointP));
	const q = designRows(...carriedDifference(other, surveyPointQ));
	const factor = covarianceScale(fit);
	const rows = [0, 1, 2].map((row) =>
		[0, 1, 2].map((column) => {
			if (factor === null) return row === column ? Infinity : 0;
			let sum = 0;
			unknownsP.forEach((a, i) => {
				unknownsQ.forEach((b, j) => {
					sum += p[7 * row + a]! * covariance[i]![j]! * q[7 * column + b]!;
				});
			});
			return factor * sum;
		}),
	);
	return rows as unknown as Matrix3;
}

/** The covariance of a survey point turned into the control frame: S·R·C·(S·R)ᵀ for standard deviations along the survey axes, m². */
export function carriedPointCovariance(fit: FitResult, surveySigma: Vector3): Matrix3 {
	const matrix = scaledRotation(fit);
	const rows = [0, 1, 2].map((row) =>
		[0, 1, 2].map((column) => [0, 1, 2].reduce((sum, k) => sum + matrix[row]![k]! * surveySigma[k]! ** 2 * matrix[column]![k]!, 0)),
	);
	return rows as unknown as Matrix3;
}

/** k of the expanded uncertainty: 2 with σ; with none Student's two-sided factor at 95.45 % for the redundancy; null where nothing is known. */
export function coverageFactor(fit: FitResult): number | null {
	if (sigmaWasGiven(fit)) return 2;
	return fit.redundancy > 0 ? studentTwoSided(1 - COVERAGE, fit.redundancy) : null;
}

/** What to multiply the fit's standard uncertainties by: σ̂₀ where σ were given and the χ² test failed high, else 1. */
export function fitInflation(fit: FitResult): number {
	const { chiSquare, varianceFactor } = fit;
	return chiSquare && varianceFactor && chiSquare.statistic > chiSquare.upper ? Math.sqrt(varianceFactor) : 1;
}

/** What J·Q·Jᵀ is multiplied by: 1 with σ, σ̂₀² with none; null where it is not known. */
function covarianceScale(fit: FitResult): number | null {
	return sigmaWasGiven(fit) ? 1 : fit.varianceFactor;
}

function sigmaWasGiven(fit: FitResult): boolean {
	return fit.sigmaGiven ?? fit.chiSquare !== null;
}

function shiftOf(fit: FitResult): Vector3 {
	if (fit.shift) return fit.shift;
	const [e, n, h] = carriedDifference({ ...fit, origin: [0, 0, 0] }, fit.origin);
	return [e + fit.translation[0], n + fit.translation[1], h + fit.translation[2]];
}

/** S·R, rows. */
function scaledRotation(fit: FitResult): number[][] {
	const heights = fit.scalesHeights === false ? 1 : fit.scale;
	return fit.rotation.map((row, k) => row.map((value) => value * (k < 2 ? fit.scale : heights)));
}

/** S·R·(survey − origin): control frame, metres. */
function carriedDifference(fit: FitResult, surveyPoint: Vector3): Vector3 {
	const x = surveyPoint[0] - fit.origin[0];
	const y = surveyPoint[1] - fit.origin[1];
	const z = surveyPoint[2] - fit.origin[2];
	const [e, n, h] = scaledRotation(fit).map((row) => row[0]! * x + row[1]! * y + row[2]! * z);
	return [e!, n!, h!];
}
