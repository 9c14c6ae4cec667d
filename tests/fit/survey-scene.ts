import type { FitInput, FitKind } from '#shared/fit/fit-schema.ts';
import { turnAfter } from '#shared/geometry/rotation.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';

/** Seeded surveys whose truth is known. */

export type Triple = [number, number, number];

export const surveySigma: Triple = [0.002, 0.002, 0.003];
export const controlSigma: Triple = [0.0015, 0.0015, 0.004];

export interface Scene {
	input: FitInput;
	/** What the instrument would have read and the control would be, without errors. */
	trueSurvey: Triple[];
	trueControl: Triple[];
	rotation: Float64Array;
	random: () => number;
	normal: () => number;
}

/** @param spread metres across; @param noise factor on the σ; @param isEven all axes as coarse as plan */
export function surveyScene(
	seed: number,
	fit: FitKind,
	count: number,
	{ spread = 30, noise = 1, sigmas = true, isEven = false } = {},
): Scene {
	const random = seededRandom(seed);
	const normal = (): number => Array.from({ length: 12 }, random).reduce((sum, value) => sum + value, -6);
	const rotation = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
	const free = fit.startsWith('free');
	turnAfter(rotation, free ? 3 * random() : 0, free ? 3 * random() : 0, fit === 'height' ? 0 : 6 * random());
	const scale = fit.endsWith('scaled') ? 0.9 + 0.2 * random() : 1;
	const trueSurvey = Array.from({ length: count }, (_, i): Triple => {
		const angle = (2 * Math.PI * (i + 0.6 * (random() - 0.5))) / count;
		const radius = (spread / 2) * (0.7 + 0.6 * random());
		return [radius * Math.cos(angle), radius * Math.sin(angle), 0.3 * spread * random()];
	});
	const trueControl = trueSurvey.map((point) => place(rotation, scale, point));
	const pairs: FitInput['pairs'] = trueSurvey.map((survey, i) => {
		const own = { name: `T${i + 1}`, survey: shake(survey, surveySigma), control: shake(trueControl[i]!, controlSigma) };
		return sigmas ? { ...own, surveySigma, controlSigma } : own;
	});
	function shake(point: Triple, sigma: Triple): Triple {
		return point.map((value, k) => value + noise * sigma[isEven ? 0 : k]! * normal()) as Triple;
	}
	return { input: { fit, pairs }, trueSurvey, trueControl, rotation, random, normal };
}

export function place(
	rotation: ArrayLike<number>,
	scale: number,
	[x, y, z]: readonly number[],
	shift: Triple = [500_000, 5_400_000, 120],
): Triple {
	return [0, 1, 2].map(
		(k) => scale * (rotation[3 * k]! * x! + rotation[3 * k + 1]! * y! + rotation[3 * k + 2]! * z!) + shift[k]!,
	) as Triple;
}
