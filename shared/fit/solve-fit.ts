import { turnAfter, yawRotation } from '#shared/geometry/rotation.ts';
import { type Adjustment, adjust, SEARCH_STEPS } from './adjust.ts';
import { closedForm } from './closed-form.ts';
import { type FitObservations, observationCount } from './fit-observations.ts';
import type { FitPose } from './fit-pose.ts';
import type { FitRefusal } from './fit-schema.ts';
import { fitUnknowns, isLevelled, isScaled } from './least-pairs.ts';
import { refuseGeometry, spreadOf } from './spread.ts';

export type Solution = { ok: true; adjustment: Adjustment } | { ok: false; refusal: FitRefusal };

/** Two minima closer than this share of F are the same height. */
const TIE = 1e-9;

/**
 * The global minimum of the fit's objective for these pairs.
 *
 * With weights the closed form is it, and the adjustment only takes its rounding out. With σ the closed form, with one number of weight a pair,
 * may start in the wrong valley where the pairs contradict each other or lie near a line; then the adjustment is also started from half and quarter turns.
 */
export function solveFit(observations: FitObservations): Solution {
	const refusal = refuseGeometry(observations);
	if (refusal) return { ok: false, refusal };
	const { planWeight, heightWeight } = startWeights(observations);
	const start = closedForm(observations, planWeight, heightWeight);
	if (!observations.sigmaGiven && !start.unique) return { ok: false, refusal: notUnique() };
	let best = adjust(observations, start.pose);
	if (
		observations.sigmaGiven &&
		observations.kind !== 'height' &&
		(!start.unique || best.state !== 'converged' || isDoubtful(observations, best))
	) {
		let rival = Infinity;
		for (const pose of otherStarts(observations, start.pose)) {
			const found = adjust(observations, pose, -1, SEARCH_STEPS);
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
 */
export function quickFit(observations: FitObservations): Adjustment | null {
	if (refuseGeometry(observations)) return null;
	const { planWeight, heightWeight } = startWeights(observations);
	const start = closedForm(observations, planWeight, heightWeight);
	if (!start.unique) return null;
	const adjustment = adjust(observations, start.pose, -1, SEARCH_STEPS);
	return adjustment.state === 'converged' ? adjustment : null;
}

function notUnique(): FitRefusal {
	return {
		code: 'no-solution',
		message:
			'More than one position fits equally well, as when two axes are exchanged on a square of targets. Check the order of the columns.',
	};
}

/** One weight a pair for the closed form: the reciprocal of its mean variance. */
function startWeights(observations: FitObservations): { planWeight: Float64Array; heightWeight: Float64Array } {
	const { count, survey, control, surveyVariance, controlVariance, kind } = observations;
	const planWeight = new Float64Array(count);
	const heightWeight = new Float64Array(count);
	const ratio = isScaled(kind) ? spreadOf(control, count).extents[0] / spreadOf(survey, count).extents[0] : observations.fixedScale;
	for (let i = 0; i < count; i++) {
		const variance = [0, 1, 2].map((k) => controlVariance[3 * i + k]! + ratio * ratio * surveyVariance[3 * i + k]!);
		if (isLevelled(kind)) {
			planWeight[i] = 2 / (variance[0]! + variance[1]!);
			heightWeight[i] = 1 / variance[2]!;
		} else {
			planWeight[i] = 3 / (variance[0]! + variance[1]! + variance[2]!);
			heightWeight[i] = kind === 'height' ? 1 / variance[2]! : planWeight[i]!;
		}
	}
	return { planWeight, heightWeight };
}

/** F far beyond what σ allow, or points so near a line that another turn could fit within σ. */
function isDoubtful(observations: FitObservations, { equations }: Adjustment): boolean {
	const redundancy = observationCount(observations) - fitUnknowns(observations.kind).length;
	if (equations.objective > redundancy + 6 * Math.sqrt(2 * redundancy) + 12) return true;
	let variance = 0;
	for (const value of equations.covariance) variance = Math.max(variance, value);
	const { extents } = spreadOf(observations.control, observations.count, isLevelled(observations.kind));
	return (isLevelled(observations.kind) ? extents[0] : extents[1]) < 20 * Math.sqrt(variance);
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
