import { turnAfter } from '#shared/geometry/rotation.ts';

/**
 * Where a fit puts survey points, in reduced coordinates: control ≈ S·R·survey + shift, S = scale on all axes,
 * or on plan alone where a known grid factor is used on a levelled fit.
 */
export interface FitPose {
	/** R, nine numbers, row by row. */
	readonly rotation: Float64Array;
	/** Metres, control frame. */
	readonly shift: Float64Array;
	planScale: number;
	heightScale: number;
}

export function clonePose(pose: FitPose): FitPose {
	return { rotation: pose.rotation.slice(), shift: pose.shift.slice(), planScale: pose.planScale, heightScale: pose.heightScale };
}

/** A pose to be written into; no rotation yet. */
export function newPose(): FitPose {
	return { rotation: new Float64Array(9), shift: new Float64Array(3), planScale: 1, heightScale: 1 };
}

export function copyPose(from: FitPose, to: FitPose): void {
	for (let k = 0; k < 9; k++) to.rotation[k] = from.rotation[k]!;
	for (let k = 0; k < 3; k++) to.shift[k] = from.shift[k]!;
	to.planScale = from.planScale;
	to.heightScale = from.heightScale;
}

/**
 * S·R, nine numbers, row by row, written into `out`: what takes a survey difference to a control difference.
 */
export function poseMatrix(pose: FitPose, out: Float64Array): void {
	for (let k = 0; k < 9; k++) out[k] = pose.rotation[k]! * (k < 6 ? pose.planScale : pose.heightScale);
}

/**
 * Moves the pose by small changes of the seven unknowns, in place.
 * @param change shift E, N, H (metres), turns about E, N, H (radians, after R), relative scale; 0 where the fit has no such unknown
 */
export function movePose(pose: FitPose, change: ArrayLike<number>): void {
	for (let k = 0; k < 3; k++) pose.shift[k] = pose.shift[k]! + change[k]!;
	turnAfter(pose.rotation, change[3]!, change[4]!, change[5]!);
	// exp keeps the scale positive whatever the step.
	const factor = Math.exp(change[6]!);
	pose.planScale *= factor;
	pose.heightScale *= factor;
}
