import type { Vector3 } from '#shared/geometry/frame.ts';
import type { FitInput, FitKind, FitPair } from './fit-schema.ts';
import { isLevelled, isScaled } from './least-pairs.ts';

/** Which coordinates of a pair are known on both sides. */
export const KNOWN_PLAN = 1;
export const KNOWN_HEIGHT = 2;
export const KNOWN_ALL = 3;

/**
 * The pairs of a fit as flat arrays, reduced to the centroids, so that coordinates of map size lose nothing and inner loops keep no objects.
 * With no σ the control side has the variance 1/weight on each axis and the survey side none.
 */
export interface FitObservations {
	readonly kind: FitKind;
	readonly count: number;
	/** What was taken off the survey coordinates. */
	readonly surveyOrigin: Vector3;
	/** What was taken off the control coordinates. */
	readonly controlOrigin: Vector3;
	/** 3·count numbers, metres less surveyOrigin; 0 where not known. */
	readonly survey: Float64Array;
	readonly control: Float64Array;
	/** 3·count numbers, m² (with no σ: of unit weight). */
	readonly surveyVariance: Float64Array;
	readonly controlVariance: Float64Array;
	/** KNOWN_PLAN, KNOWN_HEIGHT or both, a pair. */
	readonly known: Uint8Array;
	readonly sigmaGiven: boolean;
	/** The scale of fits that do not estimate it. */
	readonly fixedScale: number;
	/** False on levelled fits that do not estimate the scale: the known factor then multiplies plan only. */
	readonly scalesHeights: boolean;
}

/** Which of plan and height of a pair both sides know; a height fit asks for nothing but heights. */
export function knownCoordinates(pair: FitPair, kind: FitKind): number {
	const [surveyX, surveyY, surveyZ] = pair.survey;
	const [controlX, controlY, controlZ] = pair.control;
	const plan = kind !== 'height' && surveyX !== null && surveyY !== null && controlX !== null && controlY !== null;
	const height = surveyZ !== null && controlZ !== null;
	return (plan ? KNOWN_PLAN : 0) | (height ? KNOWN_HEIGHT : 0);
}

/** The flat form of these pairs (all of them: the caller leaves out what is held back). Σ of nothing is formed yet. */
export function observationsOf(input: FitInput, pairs: readonly FitPair[]): FitObservations {
	const count = pairs.length;
	const kind = input.fit;
	const known = Uint8Array.from(pairs, (pair) => knownCoordinates(pair, kind));
	const sigmaGiven = pairs.some((pair) => pair.controlSigma !== undefined);
	const surveyOrigin = meanOfKnown(
		pairs.map((pair) => pair.survey),
		known,
	);
	const controlOrigin = meanOfKnown(
		pairs.map((pair) => pair.control),
		known,
	);
	const observations = {
		kind,
		count,
		surveyOrigin,
		controlOrigin,
		survey: new Float64Array(3 * count),
		control: new Float64Array(3 * count),
		surveyVariance: new Float64Array(3 * count),
		controlVariance: new Float64Array(3 * count),
		known,
		sigmaGiven,
		fixedScale: isScaled(kind) || kind === 'height' ? 1 : (input.knownScale ?? 1),
		scalesHeights: !(isLevelled(kind) && !isScaled(kind)),
	};
	pairs.forEach((pair, i) => {
		for (let k = 0; k < 3; k++) {
			const at = 3 * i + k;
			const isKnown = (known[i]! & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) !== 0;
			observations.survey[at] = isKnown ? pair.survey[k]! - surveyOrigin[k]! : 0;
			observations.control[at] = isKnown ? pair.control[k]! - controlOrigin[k]! : 0;
			observations.surveyVariance[at] = sigmaGiven ? pair.surveySigma![k]! ** 2 : 0;
			observations.controlVariance[at] = sigmaGiven ? pair.controlSigma![k]! ** 2 : 1 / (pair.weight ?? 1);
		}
	});
	return observations;
}

/** The same reductions for some of the pairs only. */
export function pickPairs(observations: FitObservations, indices: readonly number[]): FitObservations {
	const triple = (values: Float64Array): Float64Array => {
		const picked = new Float64Array(3 * indices.length);
		indices.forEach((from, to) => {
			for (let k = 0; k < 3; k++) picked[3 * to + k] = values[3 * from + k]!;
		});
		return picked;
	};
	return {
		...observations,
		count: indices.length,
		survey: triple(observations.survey),
		control: triple(observations.control),
		surveyVariance: triple(observations.surveyVariance),
		controlVariance: triple(observations.controlVariance),
		known: Uint8Array.from(indices, (i) => observations.known[i]!),
	};
}

/** How many scalar observations the pairs bring: two for plan, one for height. */
export function observationCount(observations: FitObservations): number {
	let total = 0;
	for (const known of observations.known) total += (known & KNOWN_PLAN ? 2 : 0) + (known & KNOWN_HEIGHT ? 1 : 0);
	return total;
}

function meanOfKnown(points: readonly (readonly (number | null)[])[], known: Uint8Array): Vector3 {
	const mean = [0, 1, 2].map((k) => {
		const values = points.filter((_, i) => (known[i]! & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) !== 0).map((point) => point[k]!);
		const first = values[0] ?? 0;
		// About the first value, so that the sum cannot overflow or lose digits at map size.
		return first + values.reduce((sum, value) => sum + (value - first), 0) / Math.max(values.length, 1);
	});
	return [mean[0]!, mean[1]!, mean[2]!];
}
