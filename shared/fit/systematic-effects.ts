import { chiSquareTail } from '#shared/geometry/chi-square.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { turnAfter } from '#shared/geometry/rotation.ts';
import { varianceRatioTail } from '#shared/geometry/student-t.ts';
import { type AddedParameters, addParameters } from './added-parameters.ts';
import type { FitObservations } from './fit-observations.ts';
import { poseMatrix } from './fit-pose.ts';
import { type FitTrial, tryFit } from './fit-trial.ts';
import { isLevelled, isScaled } from './least-pairs.ts';

/** One cause that moves all pairs at once: a scale, a tilt of the instrument, a constant on all ranges. */

export type EffectCode = 'grid-scale' | 'not-plumb' | 'distance-constant';

/**
 * @param values grid-scale: [relative]; not-plumb: [turn about E, turn about N], radians; distance-constant: [metres that ranges are too long by]
 * @param significance the probability of as large an effect where there is none
 * @param corrected the observations with the effect taken out of the survey side, and their fit
 */
export interface SystematicEffect {
	code: EffectCode;
	values: number[];
	/** Standard deviations of the values; with no σ, from the residuals that remain. */
	sigmas: number[];
	significance: number;
	drop: number;
	corrected: FitTrial;
	/** Large enough to be worth a word, not only significant. */
	notable: boolean;
}

/** A constant is tested at half the family level, scale and tilt at the whole: all three and the residuals stay under 0.5 % together. */
const CONSTANT_LEVEL = 0.0005;
/** "More than three of its σ" for a scale, at the level of a single residual. */
const SCALE_LEVEL = 0.001;
export const TILT_LEVEL = 0.001;
const LEAST_SCALE = 50e-6;
/** Ten seconds of arc. */
const LEAST_TILT = (10 / 3600) * (Math.PI / 180);
const LEAST_CONSTANT = 0.001;

/**
 * The significant effects, strongest first. Empty for a clean set, at about 0.2 %.
 * @param station where the instrument stood, survey frame, metres; without it no distance constant can be told
 */
export function systematicEffects(trial: FitTrial, station: Vector3 | undefined): SystematicEffect[] {
	const { observations } = trial;
	if (observations.kind === 'height' || trial.redundancy < 2) return [];
	const effects: (SystematicEffect | null)[] = [];
	if (!isScaled(observations.kind)) effects.push(evaluate(trial, 'grid-scale', [scaleColumn(trial)]));
	if (isLevelled(observations.kind)) effects.push(evaluate(trial, 'not-plumb', tiltColumns(trial)));
	if (station) effects.push(evaluate(trial, 'distance-constant', [rangeColumn(trial, station)], station));
	return effects.filter((effect) => effect !== null).sort((a, b) => a.significance - b.significance || b.drop - a.drop);
}

const LEVEL: Record<EffectCode, number> = { 'grid-scale': SCALE_LEVEL, 'not-plumb': TILT_LEVEL, 'distance-constant': CONSTANT_LEVEL };
const LEAST: Record<EffectCode, number> = { 'grid-scale': LEAST_SCALE, 'not-plumb': LEAST_TILT, 'distance-constant': LEAST_CONSTANT };

function evaluate(trial: FitTrial, code: EffectCode, columns: Float64Array[], station?: Vector3): SystematicEffect | null {
	const added = addParameters(trial.observations, trial.adjustment, columns);
	if (!added) return null;
	const rest = trial.redundancy - columns.length;
	if (rest < 1 && !trial.observations.sigmaGiven) return null;
	const corrected = tryFit(takeOut(trial, code, added.values, station), columns.length);
	if (!corrected) return null;
	const left = Math.max(corrected.objective, 1e-30);
	const drop = trial.objective - corrected.objective;
	const significance = trial.observations.sigmaGiven
		? chiSquareTail(drop, columns.length)
		: varianceRatioTail(Math.max(drop, 0) / columns.length / (left / rest), columns.length, rest);
	if (!(significance < LEVEL[code])) return null;
	const sigmas = sigmasOf(added, trial.observations.sigmaGiven ? 1 : left / rest);
	return { code, values: added.values, sigmas, significance, drop, corrected, notable: Math.hypot(...added.values) > LEAST[code] };
}

function sigmasOf(added: AddedParameters, factor: number): number[] {
	return added.covariance.map((row, k) => Math.sqrt(factor * row[k]!));
}

function scaleColumn({ observations, adjustment }: FitTrial): Float64Array {
	const column = adjustment.equations.adjusted.slice();
	// A grid factor belongs to plan; only a free set-up cannot tell plan from height.
	if (isLevelled(observations.kind)) for (let at = 2; at < column.length; at += 3) column[at] = 0;
	return column;
}

export function tiltColumns({ adjustment }: FitTrial): Float64Array[] {
	const { adjusted } = adjustment.equations;
	const aboutEast = new Float64Array(adjusted.length);
	const aboutNorth = new Float64Array(adjusted.length);
	for (let at = 0; at < adjusted.length; at += 3) {
		aboutEast[at + 1] = -adjusted[at + 2]!;
		aboutEast[at + 2] = adjusted[at + 1]!;
		aboutNorth[at] = adjusted[at + 2]!;
		aboutNorth[at + 2] = -adjusted[at]!;
	}
	return [aboutEast, aboutNorth];
}

/** Ranges too long by one metre put the fitted points out along their rays. */
function rangeColumn({ observations, adjustment }: FitTrial, station: Vector3): Float64Array {
	const matrix = new Float64Array(9);
	poseMatrix(adjustment.pose, matrix);
	const rays = raysFrom(observations, station);
	const column = new Float64Array(rays.length);
	for (let at = 0; at < rays.length; at += 3) {
		for (let k = 0; k < 3; k++) {
			column[at + k] = -(matrix[3 * k]! * rays[at]! + matrix[3 * k + 1]! * rays[at + 1]! + matrix[3 * k + 2]! * rays[at + 2]!);
		}
	}
	return column;
}

/** Unit vectors from the station to the targets, survey frame; zero for a target at the station. */
function raysFrom({ survey, surveyOrigin, count }: FitObservations, station: Vector3): Float64Array {
	const rays = new Float64Array(3 * count);
	for (let at = 0; at < rays.length; at += 3) {
		const ray = [0, 1, 2].map((k) => survey[at + k]! + surveyOrigin[k]! - station[k]!);
		const length = Math.hypot(...ray);
		if (length > 0) for (let k = 0; k < 3; k++) rays[at + k] = ray[k]! / length;
	}
	return rays;
}

/** The same observations with the effect taken out of the survey coordinates. */
function takeOut({ observations, adjustment }: FitTrial, code: EffectCode, values: readonly number[], station?: Vector3): FitObservations {
	const survey = observations.survey.slice();
	if (code === 'grid-scale') {
		for (let at = 0; at < survey.length; at++) {
			if (!(isLevelled(observations.kind) && at % 3 === 2)) survey[at] = survey[at]! * (1 + values[0]!);
		}
	} else if (code === 'distance-constant' && station) {
		const rays = raysFrom(observations, station);
		for (let at = 0; at < survey.length; at++) survey[at] = survey[at]! - values[0]! * rays[at]!;
	} else {
		// The tilt is found about E and N; the survey axes lie Rᵀ from there.
		const { rotation } = adjustment.pose;
		const turn = [0, 1, 2].map((k) => rotation[k]! * values[0]! + rotation[3 + k]! * values[1]!);
		const tilt = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
		turnAfter(tilt, turn[0]!, turn[1]!, turn[2]!);
		for (let at = 0; at < survey.length; at += 3) {
			const [x, y, z] = [observations.survey[at]!, observations.survey[at + 1]!, observations.survey[at + 2]!];
			for (let k = 0; k < 3; k++) survey[at + k] = tilt[3 * k]! * x + tilt[3 * k + 1]! * y + tilt[3 * k + 2]! * z;
		}
	}
	return { ...observations, survey };
}
