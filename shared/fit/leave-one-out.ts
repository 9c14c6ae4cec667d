import { adjust } from './adjust.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN, pickPairs } from './fit-observations.ts';
import type { FitPose } from './fit-pose.ts';
import { poseMatrix } from './fit-pose.ts';
import { solveFit } from './solve-fit.ts';

export type PartialResidual = [number | null, number | null, number | null];

/**
 * The misfit of pair `i` against a full new fit of all others, fitted minus control, metres, control frame.
 * Null where the others do not determine the fit, or a coordinate is not known.
 * @param others indices of the pairs that stay in; by default all but i
 */
export function leaveOneOut(observations: FitObservations, i: number): PartialResidual | null {
	const others = Array.from({ length: observations.count }, (_, k) => k).filter((k) => k !== i);
	const solution = solveFit(pickPairs(observations, others));
	if (!solution.ok) return null;
	return misfitOf(observations, solution.adjustment.pose, i);
}

/** The same from the pose of the fit of all pairs: right where leaving one out does not change the valley. Null where it does not converge. */
export function leaveOneOutFrom(observations: FitObservations, pose: FitPose, i: number): PartialResidual | null {
	const adjustment = adjust(observations, pose, i);
	return adjustment.state === 'converged' ? misfitOf(observations, adjustment.pose, i) : null;
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
