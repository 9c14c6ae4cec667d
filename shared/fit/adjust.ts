import { invertPositiveDefinite } from '#shared/geometry/cholesky.ts';
import type { FitObservations } from './fit-observations.ts';
import { clonePose, copyPose, type FitPose, movePose, newPose } from './fit-pose.ts';
import { fitUnknowns } from './least-pairs.ts';
import { formNormalEquations, type NormalEquations, newNormalEquations } from './normal-equations.ts';

/** Plain steps before Newton's take over: sound surveys need three to six. */
const PLAIN_STEPS = 12;
const STEPS = 120;
/** For starts that are one of many. */
export const SEARCH_STEPS = 40;
/** A step under this share (of the span in metres, of a radian, of the scale) ends the iteration. */
const STEP_END = 1e-13;
/** A first step under this leaves the matrix as good as it was. */
const SMALL_STEP = 1e-3;

export interface Adjustment {
	pose: FitPose;
	/** Formed at `pose`. */
	equations: NormalEquations;
	/** Q on the unknowns of the fit, unknowns × unknowns, row by row. */
	cofactor: Float64Array;
	iterations: number;
	/** `singular`: the unknowns are not determined. `sigma`: some Σ is singular, or a number overflowed. */
	state: 'converged' | 'stalled' | 'singular' | 'sigma';
}

/** Room for one adjustment of up to `count` pairs, to be used again: a search that adjusts by the thousand allocates once. */
export interface AdjustSpace {
	readonly count: number;
	readonly equations: readonly [NormalEquations, NormalEquations];
	readonly poses: readonly [FitPose, FitPose];
	readonly cofactor: Float64Array;
	readonly change: Float64Array;
}

export function newAdjustSpace(count: number): AdjustSpace {
	return {
		count,
		equations: [newNormalEquations(count), newNormalEquations(count)],
		poses: [newPose(), newPose()],
		cofactor: new Float64Array(49),
		change: new Float64Array(7),
	};
}

/**
 * Takes a pose to the nearest minimum of F = Σ rᵀ·Σ⁻¹·r, Σ moving along (normal-equations.ts). Every step lowers F.
 *
 * δ = (ÂᵀΣ⁻¹Â)⁻¹·ÂᵀΣ⁻¹r converges at a rate of about residual/span; where that is slow (coarse σ, gross errors) Newton steps
 * with the second derivatives by differences of the exact gradient take over. The second step is taken with the matrix of the first where
 * that was small: the gradient is exact all the same, and the matrix changes by no more than residual/span.
 * @param start is left as it is
 * @param most steps at the most; a search gives up sooner than the fit itself
 * @param space where the result lives: overwritten by the next adjustment in it. By default a new one
 */
export function adjust(
	observations: FitObservations,
	start: FitPose,
	most = STEPS,
	space = newAdjustSpace(observations.count),
): Adjustment {
	const unknowns = fitUnknowns(observations.kind);
	const size = unknowns.length;
	const span = spanOf(observations);
	const { change } = space;
	let [equations, trial] = space.equations;
	let [pose, moved] = space.poses;
	copyPose(start, pose);
	const cofactor = size === 7 ? space.cofactor : space.cofactor.subarray(0, size * size);
	let state: Adjustment['state'] = 'stalled';
	let iterations = 0;
	if (!formNormalEquations(observations, pose, equations)) return { pose, equations, cofactor, iterations, state: 'sigma' };
	let lastStep = Infinity;
	// Whether Q belongs to `equations`, and whether the next step is taken with it all the same.
	let isCurrent = false;
	let isKept = false;
	for (; iterations < most; iterations++) {
		if (!isKept) {
			if (!cofactorOf(equations, unknowns, cofactor)) {
				state = 'singular';
				break;
			}
			isCurrent = true;
		}
		for (let k = 0; k < 7; k++) change[k] = 0;
		const newton = iterations >= PLAIN_STEPS && newtonStep(observations, pose, equations, unknowns, span, change);
		if (!newton) solveStep(cofactor, equations.gradient, unknowns, change);
		let step = stepLength(change, span);
		if (step < STEP_END || (step < 1e-9 && step > lastStep / 2)) {
			state = 'converged';
			break;
		}
		let accepted = false;
		for (let halving = 0; halving < 40; halving++) {
			copyPose(pose, moved);
			movePose(moved, change);
			if (formNormalEquations(observations, moved, trial) && trial.objective <= equations.objective * (1 + 1e-13) + 1e-300) {
				const before = pose;
				pose = moved;
				moved = before;
				const formed = trial;
				trial = equations;
				equations = formed;
				isCurrent = false;
				isKept = iterations === 0 && step < SMALL_STEP;
				accepted = true;
				break;
			}
			for (let k = 0; k < 7; k++) change[k] = change[k]! / 2;
			step /= 2;
		}
		if (!accepted) {
			// No lower point along the step: the minimum to working precision, if the step was small.
			state = step * 2 ** 40 < 1e-6 ? 'converged' : 'stalled';
			break;
		}
		lastStep = step;
	}
	// Q belongs to the pose that is returned.
	if (!isCurrent && state !== 'singular' && !cofactorOf(equations, unknowns, cofactor)) state = 'singular';
	return { pose, equations, cofactor, iterations, state };
}

/** Q = N⁻¹ on the unknowns of the fit. False where they are not determined. */
export function cofactorOf(equations: NormalEquations, unknowns: readonly number[], cofactor: Float64Array): boolean {
	const size = unknowns.length;
	for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) cofactor[i * size + j] = equations.normal[7 * unknowns[i]! + unknowns[j]!]!;
	return invertPositiveDefinite(cofactor, size);
}

function solveStep(cofactor: Float64Array, gradient: Float64Array, unknowns: readonly number[], change: Float64Array): void {
	const size = unknowns.length;
	for (let i = 0; i < size; i++) {
		let sum = 0;
		for (let j = 0; j < size; j++) sum += cofactor[i * size + j]! * gradient[unknowns[j]!]!;
		change[unknowns[i]!] = sum;
	}
}

/** Newton's step; false where the second derivatives are not positive definite (far from a minimum). */
function newtonStep(
	observations: FitObservations,
	pose: FitPose,
	equations: NormalEquations,
	unknowns: readonly number[],
	span: number,
	change: Float64Array,
): boolean {
	const size = unknowns.length;
	const hessian = new Float64Array(size * size);
	const move = new Float64Array(7);
	const ahead = new Float64Array(7);
	const scratch = newNormalEquations(observations.count);
	for (let j = 0; j < size; j++) {
		const unknown = unknowns[j]!;
		const h = (unknown < 3 ? span : 1) * 1e-5;
		move.fill(0);
		move[unknown] = h;
		const forward = clonePose(pose);
		movePose(forward, move);
		if (!formNormalEquations(observations, forward, scratch)) return false;
		ahead.set(scratch.gradient);
		move[unknown] = -h;
		const backward = clonePose(pose);
		movePose(backward, move);
		if (!formNormalEquations(observations, backward, scratch)) return false;
		for (let i = 0; i < size; i++) hessian[i * size + j] = (scratch.gradient[unknowns[i]!]! - ahead[unknowns[i]!]!) / (2 * h);
	}
	for (let i = 0; i < size; i++) {
		for (let j = 0; j < i; j++) hessian[i * size + j] = hessian[j * size + i] = (hessian[i * size + j]! + hessian[j * size + i]!) / 2;
	}
	if (!invertPositiveDefinite(hessian, size)) return false;
	solveStep(hessian, equations.gradient, unknowns, change);
	return true;
}

function stepLength(change: Float64Array, span: number): number {
	let longest = 0;
	for (let k = 0; k < 3; k++) longest = Math.max(longest, Math.abs(change[k]!) / span);
	for (let k = 3; k < 7; k++) longest = Math.max(longest, Math.abs(change[k]!));
	return longest;
}

/** The root mean square distance from the reduced origin, metres; 1 for a single pair. */
function spanOf({ control, count }: FitObservations): number {
	let square = 0;
	for (let at = 0; at < 3 * count; at++) square += control[at]! * control[at]!;
	return Math.sqrt(square / Math.max(count, 1)) || 1;
}
