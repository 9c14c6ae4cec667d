import { turnAfter, yawRotation } from '#shared/geometry/rotation.ts';
import { type Adjustment, type AdjustSpace, adjust, SEARCH_STEPS } from './adjust.ts';
import { type ClosedForm, closedForm } from './closed-form.ts';
import { type FitObservations, observationCount } from './fit-observations.ts';
import { type FitPose, newPose } from './fit-pose.ts';
import type { FitRefusal } from './fit-schema.ts';
import { fitUnknowns, isLevelled, isScaled } from './least-pairs.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';
import { LEAST_SPREAD, refuseGeometry, spreadOf } from './spread.ts';

export type Solution = { ok: true; adjustment: Adjustment } | { ok: false; refusal: FitRefusal };

/** Two minima closer than this share of F are the same height. */
const TIE = 1e-9;

/**
 * The global minimum of the fit's objective for these pairs.
 *
 * With weights the closed form is it, and the adjustment only takes its rounding out. With σ the closed form, with one number of weight a pair,
 * may start in the wrong valley where the pairs contradict each other or lie near a line; then the adjustment is also started from half and quarter turns.
 * @param space where the adjustment lives: overwritten by the next one in it. By default a new one
 */
export function solveFit(observations: FitObservations, space?: AdjustSpace): Solution {
	const start = startOf(observations);
	const refusal = isSurelyApart(observations, start) ? null : refuseGeometry(observations);
	if (refusal) return { ok: false, refusal };
	if (!observations.sigmaGiven && !start.unique) return { ok: false, refusal: notUnique() };
	let best = adjust(observations, start.pose, undefined, space);
	if (
		observations.sigmaGiven &&
		observations.kind !== 'height' &&
		(!start.unique || best.state !== 'converged' || isDoubtful(observations, best, start))
	) {
		let rival = Infinity;
		for (const pose of otherStarts(observations, start.pose)) {
			const found = adjust(observations, pose, SEARCH_STEPS);
			if (found.state !== 'converged') continue;
			const lower = best.state !== 'converged' || found.equations.objective < best.equations.objective;
			const [winner, loser] = lower ? [found, best] : [best, found];
			if (loser.state === 'converged' && !samePose(winner.pose, loser.pose))
				rival = Math.min(lower ? Infinity : rival, loser.equations.objective);
			best = winner;
		}
		if (rival <= best.equations.objective * (1 + TIE) + 1e-12) return { ok: false, refusal: notUnique() };
	}
	if (best.state === 'sigma') {
		return {
			ok: false,
			refusal: {
				code: 'bad-sigma',
				message: 'The standard deviations of a pair leave a direction without any error, so its weight would be infinite.',
			},
		};
	}
	if (best.state === 'singular') {
		return {
			ok: false,
			refusal: { code: 'on-a-line', message: 'The targets lie too nearly on a line for their standard deviations to fix the turn.' },
		};
	}
	if (best.state === 'stalled' && observations.sigmaGiven) {
		return {
			ok: false,
			refusal: { code: 'no-solution', message: 'The pairs contradict each other so much that no best position could be found.' },
		};
	}
	return { ok: true, adjustment: best };
}

/**
 * The minimum that the closed form leads to, without looking for others: for searches that try many subsets. Null where the pairs do not
 * determine the fit, or the iteration found no minimum.
 * @param space where the adjustment lives: overwritten by the next one in it. By default a new one
 */
export function quickFit(observations: FitObservations, space?: AdjustSpace): Adjustment | null {
	const start = startOf(observations);
	if (!start.unique || (!isSurelyApart(observations, start) && refuseGeometry(observations))) return null;
	const adjustment = adjust(observations, start.pose, SEARCH_STEPS, space);
	return adjustment.state === 'converged' ? adjustment : null;
}

/** The closed form knows already that no extent is anywhere near the least: the careful look at both sides may be left out. */
function isSurelyApart({ kind }: FitObservations, start: ClosedForm): boolean {
	return !isLevelled(kind) && start.leastExtentM > 10 * LEAST_SPREAD;
}

function notUnique(): FitRefusal {
	return {
		code: 'no-solution',
		message:
			'More than one position fits equally well, as when two axes are exchanged on a square of targets. Check the order of the columns.',
	};
}

// Scratch: an array of more than a few numbers costs as much as the sums over it. The start is read before the next one is made.
let planWeights = new Float64Array(64);
let heightWeights = new Float64Array(64);
const startPose = newPose();

/** The closed form with one weight a pair: the reciprocal of its mean variance. */
function startOf(observations: FitObservations): ClosedForm {
	const { count, survey, control, surveyVariance, controlVariance, kind } = observations;
	if (planWeights.length < count) {
		planWeights = new Float64Array(2 * count);
		heightWeights = new Float64Array(2 * count);
	}
	const planWeight = planWeights;
	const heightWeight = isLevelled(kind) || kind === 'height' ? heightWeights : planWeights;
	const ratio = isScaled(kind) ? squareAboutMean(control, count) / squareAboutMean(survey, count) : observations.fixedScale ** 2;
	for (let i = 0; i < count; i++) {
		const at = 3 * i;
		const e = controlVariance[at]! + ratio * surveyVariance[at]!;
		const n = controlVariance[at + 1]! + ratio * surveyVariance[at + 1]!;
		const h = controlVariance[at + 2]! + ratio * surveyVariance[at + 2]!;
		if (heightWeight === planWeight) planWeight[i] = 3 / (e + n + h);
		else {
			planWeight[i] = 2 / (e + n);
			heightWeight[i] = 1 / h;
		}
	}
	return closedForm(observations, planWeight, heightWeight, startPose);
}

/** Σ of the squared distances from the mean, m². */
function squareAboutMean(points: Float64Array, count: number): number {
	let x = 0;
	let y = 0;
	let z = 0;
	for (let at = 0; at < 3 * count; at += 3) {
		x += points[at]!;
		y += points[at + 1]!;
		z += points[at + 2]!;
	}
	x /= count;
	y /= count;
	z /= count;
	let square = 0;
	for (let at = 0; at < 3 * count; at += 3) square += (points[at]! - x) ** 2 + (points[at + 1]! - y) ** 2 + (points[at + 2]! - z) ** 2;
	return square;
}

/** F far beyond what σ allow, or points so near a line that another turn could fit within σ. */
function isDoubtful(observations: FitObservations, { equations }: Adjustment, start: ClosedForm): boolean {
	const redundancy = observationCount(observations) - fitUnknowns(observations.kind).length;
	if (equations.objective > redundancy + 6 * Math.sqrt(2 * redundancy) + 12) return true;
	let variance = 0;
	const groups = sigmaGroupsOf(observations).ends.length;
	for (let at = 0; at < 6 * groups; at++) if (equations.covariance[at]! > variance) variance = equations.covariance[at]!;
	const least = 20 * Math.sqrt(variance);
	if (start.leastExtentM > least) return false;
	const { extents } = spreadOf(observations.control, observations.count, isLevelled(observations.kind));
	return (isLevelled(observations.kind) ? extents[0] : extents[1]) < least;
}

/** Poses about the centre of the control: quarter turns of the bearing, or half and quarter turns about the principal axes. */
function otherStarts(observations: FitObservations, pose: FitPose): FitPose[] {
	const starts: FitPose[] = [];
	const add = (turn: readonly [number, number, number]): void => {
		const rotation = pose.rotation.slice();
		turnAfter(rotation, turn[0], turn[1], turn[2]);
		// The reduced origins are the centroids: nearly no shift belongs to every turn about them.
		starts.push({ rotation, shift: new Float64Array(3), planScale: pose.planScale, heightScale: pose.heightScale });
	};
	if (isLevelled(observations.kind)) {
		for (let k = 0; k < 8; k++) starts.push({ ...pose, rotation: yawRotation((k * Math.PI) / 4), shift: new Float64Array(3) });
		return starts;
	}
	const { axes } = spreadOf(observations.control, observations.count);
	for (let k = 0; k < 3; k++) {
		const axis = [axes[k]!, axes[3 + k]!, axes[6 + k]!] as const;
		for (const angle of k === 0 ? [0.25, 0.5, 0.75, 1, 1.25, 1.5, 1.75] : [0.5, 1, 1.5]) {
			add([axis[0] * angle * Math.PI, axis[1] * angle * Math.PI, axis[2] * angle * Math.PI]);
		}
	}
	return starts;
}

function samePose(a: FitPose, b: FitPose): boolean {
	return a.rotation.every((value, k) => Math.abs(value - b.rotation[k]!) < 1e-6);
}
