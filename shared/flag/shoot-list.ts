import type { CheckpointStanding } from '../check/standing.ts';
import type { FitResult } from '../fit/fit-schema.ts';
import type { Vector3 } from '../geometry/frame.ts';

/** Why a checkpoint is to be shot again. */
export type ShootReason = 'not-measured' | 'too-close' | 'voided' | 'put-right';

/** Which of a checkpoint's reasons to shoot it again comes first; null: nothing is to be measured. */
export function shootReason(
	standing: Pick<CheckpointStanding, 'newest'> | null,
	{ isVoided, isPutRight, isAgain }: { isVoided: boolean; isPutRight: boolean; isAgain: boolean },
): ShootReason | null {
	const deviation = standing?.newest.isFitAdopted === true ? standing.newest.deviation : null;
	if (deviation === null || deviation.deviationMm === null) return isVoided ? 'voided' : 'not-measured';
	if (isPutRight) return 'put-right';
	if (isAgain || deviation.verdict === 'too-close-to-call' || deviation.verdict === 'undecided') return 'too-close';
	return null;
}

/**
 * A place of the design as the instrument would see it: x = Rᵀ·(y − t)/s, the fit turned round. Metres. Heights are not scaled where the fit's
 * known scale is one of the plan alone.
 */
export function surveyPointOf(fit: Pick<FitResult, 'rotation' | 'translation' | 'scale' | 'scalesHeights'>, designPoint: Vector3): Vector3 {
	const { rotation, translation, scale, scalesHeights } = fit;
	const from = designPoint.map((value, axis) => value - translation[axis]!);
	const turned = [0, 1, 2].map((axis) => rotation[0]![axis]! * from[0]! + rotation[1]![axis]! * from[1]! + rotation[2]![axis]! * from[2]!);
	return [turned[0]! / scale, turned[1]! / scale, turned[2]! / (scalesHeights === false ? 1 : scale)];
}
