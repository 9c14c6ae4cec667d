import { chiSquareQuantile } from '#shared/geometry/chi-square.ts';
import type { Matrix3, Vector3 } from '#shared/geometry/frame.ts';
import { toMatrix3 } from '#shared/geometry/rotation.ts';
import { popeTau } from '#shared/geometry/student-t.ts';
import type { Adjustment } from './adjust.ts';
import { carriedPointCovariance, carryPoint, fitCovarianceAt } from './carry-point.ts';
import { designRows } from './design-rows.ts';
import { fitFindings } from './fit-findings.ts';
import { type FitObservations, observationCount, observationsOf } from './fit-observations.ts';
import { poseMatrix } from './fit-pose.ts';
import type { FitInput, FitOutcome, FitPair, FitPairResult, FitResult } from './fit-schema.ts';
import { fitUnknowns } from './least-pairs.ts';
import { fillLeaveOneOut, misfitOf, type PartialResidual } from './leave-one-out.ts';
import { fillPairFigures, newPairFigures } from './pair-figures.ts';
import { fullCofactor, NORMAL_CRITICAL, PAIR_SIGNIFICANCE, type PairReliability, pairReliability } from './pair-reliability.ts';
import { solveFit } from './solve-fit.ts';

/**
 * The fit from survey to control, with every figure that says how good it is. docs/fit.md has the mathematics.
 * @param input of readFitInput: shape, names and σ are sound. Metres, radians
 * @param options findings: false leaves the search for causes out; the numbers are the same
 * @returns a refusal where the pairs do not determine the fit, or its best rotation is not unique
 */
export function computeFit(input: FitInput, options: { findings: boolean } = { findings: true }): FitOutcome {
	const inFit = input.pairs.filter((pair) => !pair.heldBack);
	const observations = observationsOf(input, inFit);
	const solution = solveFit(observations);
	if (!solution.ok) return solution;
	const result = describe(input, inFit, observations, solution.adjustment);
	if (!everyNumberFinite(result)) {
		return { ok: false, refusal: { code: 'not-finite', message: 'The numbers are too large or too small: the computation overflows.' } };
	}
	if (options.findings) {
		const names = inFit.map(({ name }) => name);
		result.findings = fitFindings(input, names, observations, solution.adjustment);
	}
	return { ok: true, result };
}

function describe(input: FitInput, inFit: readonly FitPair[], observations: FitObservations, adjustment: Adjustment): FitResult {
	const { pose, equations } = adjustment;
	const { sigmaGiven, surveyOrigin, controlOrigin } = observations;
	const redundancy = observationCount(observations) - fitUnknowns(input.fit).length;
	const varianceFactor = redundancy > 0 ? equations.objective / redundancy : null;
	const size = fitUnknowns(input.fit).length;
	const shift: Vector3 = [pose.shift[0]! + controlOrigin[0], pose.shift[1]! + controlOrigin[1], pose.shift[2]! + controlOrigin[2]];
	const base: FitResult = {
		fit: input.fit,
		scale: pose.planScale,
		rotation: toMatrix3(pose.rotation) as FitResult['rotation'],
		translation: translationOf(observations, adjustment, shift),
		origin: [...surveyOrigin],
		shift: [...shift],
		sigmaGiven,
		scalesHeights: observations.scalesHeights,
		parameterCovariance: Array.from({ length: size }, (_, i) => Array.from(adjustment.cofactor.subarray(i * size, i * size + size))),
		rms: rmsOf(equations.residual, observations.count),
		redundancy,
		varianceFactor,
		chiSquare: sigmaGiven && redundancy > 0 ? chiSquareTest(equations.objective, redundancy, input.confidence ?? 0.95) : null,
		pairs: [],
		carried: [],
		findings: [],
	};
	const cofactor = fullCofactor(adjustment, observations);
	const reliability = inFit.map((_, i) => pairReliability(observations, adjustment, cofactor, i));
	const places = new Map(inFit.map((pair, i) => [pair, i]));
	const withoutOne = misfitsWithoutOne(observations, adjustment);
	base.pairs = input.pairs.map((pair) => {
		const i = places.get(pair) ?? -1;
		return i < 0
			? heldBackResult(input, pair, base)
			: pairResult(pair, i, observations, adjustment, reliability[i]!, withoutOne(i), varianceFactor, redundancy);
	});
	base.carried = (input.carry ?? []).map((point) => {
		const matrix = scaledDifference(observations, adjustment, point.survey);
		return {
			name: point.name,
			point: [...carryPoint(base, point.survey)],
			covariance: carriedCovariance(base, point.survey, sigmaGiven ? point.surveySigma : undefined),
			hiddenBlunder: sigmaGiven ? hiddenBlunder(inFit, reliability, matrix) : null,
		};
	});
	return base;
}

/** Where a person looks, a refit more costs nothing: so exact, metres. */
const SHOWN_EXACT_M = 1e-7;

/** The misfit of pair i against a fit of the others; null where they do not determine one, and on an axis that is not known. */
function misfitsWithoutOne(observations: FitObservations, adjustment: Adjustment): (i: number) => PartialResidual | null {
	const figures = newPairFigures(observations.count);
	fillPairFigures(observations, adjustment, figures);
	const misfits = new Float64Array(3 * observations.count);
	fillLeaveOneOut(observations, adjustment, figures, misfits, SHOWN_EXACT_M);
	return (i) => {
		const misfit = Array.from(misfits.subarray(3 * i, 3 * i + 3), (value) => (Number.isNaN(value) ? null : value));
		return misfit.every((value) => value === null) ? null : (misfit as PartialResidual);
	};
}

function translationOf(observations: FitObservations, { pose }: Adjustment, shift: Vector3): [number, number, number] {
	const matrix = new Float64Array(9);
	poseMatrix(pose, matrix);
	const [x, y, z] = observations.surveyOrigin;
	return [0, 1, 2].map((k) => shift[k]! - (matrix[3 * k]! * x + matrix[3 * k + 1]! * y + matrix[3 * k + 2]! * z)) as [
		number,
		number,
		number,
	];
}

function rmsOf(residual: Float64Array, count: number): number {
	let square = 0;
	for (const value of residual) square += value * value;
	return Math.sqrt(square / count);
}

function chiSquareTest(statistic: number, redundancy: number, confidence: number): NonNullable<FitResult['chiSquare']> {
	const lower = chiSquareQuantile((1 - confidence) / 2, redundancy);
	const upper = chiSquareQuantile((1 + confidence) / 2, redundancy);
	return { statistic, lower, upper, passes: statistic >= lower && statistic <= upper };
}

function pairResult(
	pair: FitPair,
	i: number,
	observations: FitObservations,
	{ pose }: Adjustment,
	reliability: PairReliability,
	withoutIt: PartialResidual | null,
	varianceFactor: number | null,
	redundancy: number,
): FitPairResult {
	const { sigmaGiven } = observations;
	const standardised = largest(reliability.standardised);
	let normalised = standardised;
	if (!sigmaGiven) normalised = standardised !== null && varianceFactor ? standardised / Math.sqrt(varianceFactor) : null;
	return {
		name: pair.name,
		residual: misfitOf(observations, pose, i),
		redundancy: reliability.redundancy,
		normalised,
		critical: sigmaGiven ? NORMAL_CRITICAL : redundancy > 0 ? popeTau(PAIR_SIGNIFICANCE, redundancy) : null,
		smallestBlunder: sigmaGiven ? largest(reliability.smallestBlunder) : null,
		leaveOneOut: withoutIt,
		heldBack: false,
	};
}

/** A pair that checks the fit: its misfit over everything that both sides and the fit may be off by. */
function heldBackResult(input: FitInput, pair: FitPair, fit: FitResult): FitPairResult {
	// An unknown coordinate on the survey side leaves the carried point open on the axes that depend on it.
	const own = observationsOf({ ...input, pairs: [pair] }, [pair]);
	const known = [own.known[0]! & 1, own.known[0]! & 1, own.known[0]! & 2];
	const survey = pair.survey.map((value, k) => (value === null || known[k] === 0 ? fit.origin[k]! : value)) as unknown as Vector3;
	const carried = carryPoint(fit, survey);
	const fromFit = fitCovarianceAt(fit, survey);
	const pointVariance = pair.surveySigma ? carriedPointCovariance(fit, pair.surveySigma) : null;
	const scale = own.sigmaGiven ? 1 : (fit.varianceFactor ?? Number.NaN);
	const residual = [0, 1, 2].map((k) => (known[k] ? carried[k]! - pair.control[k]! : null));
	const sigma = [0, 1, 2].map((k) => {
		if (!known[k]) return null;
		const variance = (pointVariance ? pointVariance[k]![k]! : 0) + scale * own.controlVariance[k]! + fromFit[k]![k]!;
		return Number.isFinite(variance) ? Math.sqrt(variance) : null;
	});
	const normalised = largest(residual.map((value, k) => (value === null || !sigma[k] ? null : Math.abs(value) / sigma[k])));
	return {
		name: pair.name,
		residual: residual as FitPairResult['residual'],
		redundancy: null,
		normalised,
		critical: NORMAL_CRITICAL,
		smallestBlunder: null,
		leaveOneOut: null,
		heldBack: true,
		sigma: sigma as FitPairResult['residual'],
	};
}

function carriedCovariance(fit: FitResult, survey: Vector3, surveySigma: Vector3 | undefined): FitResult['carried'][number]['covariance'] {
	const fromFit = fitCovarianceAt(fit, survey);
	if (!Number.isFinite(fromFit[0][0])) return null;
	const own: Matrix3 | null = surveySigma ? carriedPointCovariance(fit, surveySigma) : null;
	return fromFit.map((row, k) => row.map((value, l) => value + (own ? own[k]![l]! : 0))) as FitResult['carried'][number]['covariance'];
}

/** S·R·(survey − origin). */
function scaledDifference(observations: FitObservations, { pose }: Adjustment, survey: Vector3): Vector3 {
	const matrix = new Float64Array(9);
	poseMatrix(pose, matrix);
	const [x, y, z] = [0, 1, 2].map((k) => survey[k]! - observations.surveyOrigin[k]!) as [number, number, number];
	return [0, 1, 2].map((k) => matrix[3 * k]! * x + matrix[3 * k + 1]! * y + matrix[3 * k + 2]! * z) as unknown as Vector3;
}

/** External reliability (Baarda 1968): the most that one pair's smallest detectable blunder would move this place, and which pair. */
function hiddenBlunder(
	inFit: readonly FitPair[],
	reliability: readonly PairReliability[],
	difference: Vector3,
): FitResult['carried'][number]['hiddenBlunder'] {
	const rows = designRows(...difference);
	let worst: { metres: number; pair: string } | null = null;
	reliability.forEach(({ smallestBlunder, response }, i) => {
		for (let axis = 0; axis < 3; axis++) {
			const blunder = smallestBlunder[axis];
			if (blunder === null || blunder === undefined) continue;
			let square = 0;
			for (let k = 0; k < 3; k++) {
				let sum = 0;
				for (let p = 0; p < 7; p++) sum += rows[7 * k + p]! * response[3 * p + axis]!;
				square += (blunder * sum) ** 2;
			}
			const metres = Math.sqrt(square);
			if (worst === null || metres > worst.metres) worst = { metres, pair: inFit[i]!.name };
		}
	});
	return worst;
}

function largest(values: readonly (number | null)[]): number | null {
	return values.reduce<number | null>((most, value) => (value === null ? most : Math.max(most ?? 0, value)), null);
}

function everyNumberFinite(value: unknown): boolean {
	if (typeof value === 'number') return Number.isFinite(value);
	if (value === null || typeof value !== 'object') return true;
	return Object.values(value).every(everyNumberFinite);
}
