import type { Finding } from '../fit/fit-schema.ts';
import type { Vector3 } from '../geometry/frame.ts';
import { principalAxes } from '../geometry/plan-covariance.ts';
import { signedMm } from '../tolerance/millimetre-text.ts';
import type { CheckedCheckpoint } from './checked-checkpoint.ts';
import { directionWords } from './direction-words.ts';
import type { WeightedPlace } from './fit-covariance-field.ts';
import { deviationGradient } from './measure-deviation.ts';
import type { PreparedSetup } from './observation.ts';

/** One deviation as an equation for the shift: d ≈ nᵀ·t, with the place it was measured at. */
interface Equation {
	readonly normal: Vector3;
	readonly deviationMm: number;
	readonly surveyPoint: Vector3;
}

/** Fewer say nothing of a common cause. */
const leastCount = 5;

/** A weighted mean of deviations and its u: what the fit gives to the weighted sum, the common part once, and the scatter of what is left. */
function meanOf(
	setup: PreparedSetup,
	equations: readonly Equation[],
	weights: readonly number[],
	residuals: readonly number[],
	unknowns: number,
): { meanMm: number; uMm: number } {
	let meanMm = 0;
	let weightSquares = 0;
	let squares = 0;
	const terms: WeightedPlace[] = equations.map(({ normal, surveyPoint, deviationMm }, index) => {
		const weight = weights[index]!;
		meanMm += weight * deviationMm;
		weightSquares += weight * weight;
		squares += residuals[index]! ** 2;
		return { surveyPoint, weight: [weight * normal[0], weight * normal[1], weight * normal[2]] };
	});
	const scatter = squares / (equations.length - unknowns);
	const uMm = Math.sqrt(setup.field.varianceOfSum(terms) * 1e6 + setup.setup.commonMm ** 2 + scatter * weightSquares);
	return { meanMm, uMm };
}

function levelFinding(setup: PreparedSetup, equations: readonly Equation[]): Finding | null {
	const n = equations.length;
	if (n < leastCount) return null;
	const plain = equations.reduce((sum, { deviationMm }) => sum + deviationMm, 0) / n;
	const { meanMm, uMm } = meanOf(
		setup,
		equations,
		equations.map(() => 1 / n),
		equations.map(({ deviationMm }) => deviationMm - plain),
		1,
	);
	if (Math.abs(meanMm) <= 2 * uMm) return null;
	return {
		code: 'common-shift',
		pairs: [],
		message: `The ${n} levels of ${setup.setup.name} are on average ${Math.abs(meanMm).toFixed(1)} mm ${meanMm < 0 ? 'low' : 'high'}, more than twice what is known of that (${uMm.toFixed(1)} mm). Look for one cause (target height, benchmark) before flagging each.`,
		evidence: { setup: setup.setup.name, kind: 'level', heightMm: meanMm, uMm, count: n },
	};
}

/** The shift in plan that plan marks and upright faces agree on, along the principal axes of what their directions cover. */
function planFinding(setup: PreparedSetup, equations: readonly Equation[]): Finding | null {
	if (equations.length < leastCount) return null;
	const normals = [0, 0, 0];
	for (const {
		normal: [e, n],
	} of equations) {
		normals[0]! += e * e;
		normals[1]! += e * n;
		normals[2]! += n * n;
	}
	const axes = principalAxes([
		[normals[0]!, normals[1]!],
		[normals[1]!, normals[2]!],
	]);
	const [le, ln] = axes.long;
	const directions = [
		{ axis: [le, ln] as const, strength: axes.longSigma ** 2 },
		{ axis: [-ln, le] as const, strength: axes.shortSigma ** 2 },
	].filter(({ strength }) => strength >= 2);
	if (directions.length === 0) return null;
	const weightsAlong = directions.map(({ axis, strength }) =>
		equations.map(({ normal }) => (normal[0] * axis[0] + normal[1] * axis[1]) / strength),
	);
	const shifts = weightsAlong.map((weights) => equations.reduce((sum, { deviationMm }, index) => sum + weights[index]! * deviationMm, 0));
	const residuals = equations.map(({ normal, deviationMm }) =>
		directions.reduce((rest, { axis }, k) => rest - shifts[k]! * (normal[0] * axis[0] + normal[1] * axis[1]), deviationMm),
	);
	const means = weightsAlong.map((weights) => meanOf(setup, equations, weights, residuals, directions.length));
	if (!means.some(({ meanMm, uMm }) => Math.abs(meanMm) > 2 * uMm)) return null;
	const shift: [number, number] = [0, 1].map((part) =>
		directions.reduce((sum, { axis }, k) => sum + means[k]!.meanMm * axis[part]!, 0),
	) as [number, number];
	return {
		code: 'common-shift',
		pairs: [],
		message: `What ${setup.setup.name} measured in plan lies on average ${directionWords(shift, 0)} of the design (mm), more than twice what is known of that. Look for one cause (a target, the grid) before flagging each.`,
		evidence: {
			setup: setup.setup.name,
			kind: 'plan',
			eastMm: shift[0],
			northMm: shift[1],
			uMm: means.map(({ uMm }) => uMm),
			count: equations.length,
		},
	};
}

/** Faces that look all ways and are all proud or all shy: an offset, ply or prism constant rather than the work. */
function faceFinding(setup: PreparedSetup, equations: readonly Equation[]): Finding | null {
	const n = equations.length;
	if (n < leastCount) return null;
	const balance = [0, 1, 2].map((axis) => equations.reduce((sum, { normal }) => sum + normal[axis]!, 0) / n);
	if (Math.hypot(...balance) > 0.5) return null;
	const plain = equations.reduce((sum, { deviationMm }) => sum + deviationMm, 0) / n;
	const { meanMm, uMm } = meanOf(
		setup,
		equations,
		equations.map(() => 1 / n),
		equations.map(({ deviationMm }) => deviationMm - plain),
		1,
	);
	if (Math.abs(meanMm) <= 2 * uMm) return null;
	return {
		code: 'common-shift',
		pairs: [],
		message: `The ${n} faces of ${setup.setup.name}, looking all ways, are on average ${signedMm(meanMm, 1)} mm (+ is proud). Look for one cause (offset, ply, prism constant) before flagging each.`,
		evidence: { setup: setup.setup.name, kind: 'face', alongNormalsMm: meanMm, uMm, count: n },
	};
}

/**
 * Whether the mean of all deviations of a set-up is beyond 2 of its u: one cause rather than many faults. Levels by themselves, faces along their
 * normals, and the shift in plan that faces and marks agree on. u holds the fit's covariance of the very sum, the common part, and the scatter.
 */
export function commonShiftFindings(checked: readonly CheckedCheckpoint[]): Finding[] {
	const bySetup = new Map<PreparedSetup, CheckedCheckpoint[]>();
	for (const entry of checked) {
		if (entry.observation === null || entry.measured === null) continue;
		const list = bySetup.get(entry.observation.setup) ?? [];
		list.push(entry);
		bySetup.set(entry.observation.setup, list);
	}
	const findings: Finding[] = [];
	for (const [setup, entries] of bySetup) {
		if (!setup.field.isKnown) continue;
		const levels: Equation[] = [];
		const faces: Equation[] = [];
		const plan: Equation[] = [];
		for (const { checkpoint, observation, measured } of entries) {
			const { surveyPoint } = observation!;
			if (measured!.offsetMm !== null) {
				plan.push(
					{ normal: [1, 0, 0], deviationMm: measured!.offsetMm[0], surveyPoint },
					{ normal: [0, 1, 0], deviationMm: measured!.offsetMm[1], surveyPoint },
				);
				continue;
			}
			const equation = { normal: deviationGradient(checkpoint), deviationMm: measured!.deviationMm, surveyPoint };
			if (checkpoint.characteristic === 'level') levels.push(equation);
			else {
				faces.push(equation);
				if (Math.abs(equation.normal[2]) < 0.3) plan.push(equation);
			}
		}
		for (const finding of [levelFinding(setup, levels), planFinding(setup, plan), faceFinding(setup, faces)])
			if (finding !== null) findings.push(finding);
	}
	return findings;
}
