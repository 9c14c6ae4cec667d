import type { Matrix3, Vector3 } from '#shared/geometry/frame.ts';
import { coverageFactor, fitCovarianceAt } from './carry-point.ts';
import { computeFit } from './compute-fit.ts';
import type { FitInput, FitKind, FitRefusal, FitResult } from './fit-schema.ts';

/** A checkpoint to be measured. `direction`: unit vector, control frame, for one along a direction; null for plan, where the longer axis counts. */
export interface PlannedCheckpoint {
	name: string;
	place: Vector3;
	direction: Vector3 | null;
	/** Upper less lower limit, metres; twice the radius of a disc; null where there is none. */
	toleranceWidthM: number | null;
	/** Of a single shot at it, control frame, m². */
	shotCovariance: Matrix3;
}

export interface SurveyPlan {
	fit: FitKind;
	/** Where targets will stand, control frame, metres, with the σ of the control and of sighting them, metres. */
	targets: readonly { name: string; place: Vector3; controlSigma: Vector3; surveySigma: Vector3 }[];
	/** What the points of a set-up share, metres (pole height, prism constant). */
	commonM: number;
	checkpoints: readonly PlannedCheckpoint[];
}

/**
 * @param standardUncertaintyM u of one deviation: fit, point and common part together
 * @param expandedM U = 2u
 * @param capability Cm = T/(4u) (JCGM 106:2012, 7.6); null without a tolerance
 */
export interface PlannedUncertainty {
	name: string;
	fitUncertaintyM: number;
	standardUncertaintyM: number;
	expandedM: number;
	capability: number | null;
}

/**
 * What a survey can be expected to tell, before anyone walks out: the covariance of a fit needs the geometry and the σ, not the measurements.
 * The smallest blunder that each target would reveal stands in the pairs of `fit`.
 * @returns a refusal where the targets do not determine the fit
 */
export function planSurvey(
	plan: SurveyPlan,
):
	| { ok: true; fit: FitResult; checkpoints: PlannedUncertainty[]; smallestBlunders: { target: string; metres: number | null }[] }
	| { ok: false; refusal: FitRefusal } {
	const input: FitInput = {
		fit: plan.fit,
		pairs: plan.targets.map(({ name, place, controlSigma, surveySigma }) => ({
			name,
			survey: [...place],
			control: [...place],
			surveySigma: [...surveySigma],
			controlSigma: [...controlSigma],
		})),
	};
	const outcome = computeFit(input, { findings: false });
	if (!outcome.ok) return outcome;
	const fit = outcome.result;
	const factor = coverageFactor(fit) ?? 2;
	const checkpoints = plan.checkpoints.map(({ name, place, direction, toleranceWidthM, shotCovariance }): PlannedUncertainty => {
		const fromFit = fitCovarianceAt(fit, place);
		const fitVariance = varianceAlong(fromFit, direction);
		const own = fromFit.map((row, k) => row.map((value, l) => value + shotCovariance[k]![l]!));
		const standardUncertaintyM = Math.sqrt(varianceAlong(own, direction) + plan.commonM ** 2);
		return {
			name,
			fitUncertaintyM: Math.sqrt(fitVariance),
			standardUncertaintyM,
			expandedM: factor * standardUncertaintyM,
			capability: toleranceWidthM === null ? null : toleranceWidthM / (4 * standardUncertaintyM),
		};
	});
	return {
		ok: true,
		fit,
		checkpoints,
		smallestBlunders: fit.pairs.map(({ name, smallestBlunder }) => ({ target: name, metres: smallestBlunder })),
	};
}

/** Along a direction, or along the long axis of the plan ellipse. */
function varianceAlong(covariance: readonly (readonly number[])[], direction: Vector3 | null): number {
	if (direction) return direction.reduce((sum, a, k) => sum + direction.reduce((row, b, l) => row + a * covariance[k]![l]! * b, 0), 0);
	const [a, b, d] = [covariance[0]![0]!, covariance[0]![1]!, covariance[1]![1]!];
	return (a + d) / 2 + Math.hypot((a - d) / 2, b);
}
