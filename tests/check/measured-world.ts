import type { CheckInput, CheckInputCheckpoint, CheckInputElement, CheckInputPoint, CheckInputSetup } from '#shared/check/check-input.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput, FitPair, FitResult } from '#shared/fit/fit-schema.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';

/** A world that could be measured: the truth first, then the survey of it. Metres; yaw counter-clockwise. */
export interface World {
	readonly yawRad: number;
	readonly shift: Vector3;
}

export const world: World = { yawRad: 0.7, shift: [458_870.063, 5_438_232.99, 113.7] };

/** Where a place of the design frame stands in the survey frame. */
export function toSurvey([e, n, h]: Vector3, { yawRad, shift }: World = world): Vector3 {
	const [x, y] = [e - shift[0], n - shift[1]];
	return [Math.cos(yawRad) * x + Math.sin(yawRad) * y, Math.cos(yawRad) * y - Math.sin(yawRad) * x, h - shift[2]];
}

/** A place given near the world's origin, in the design frame. */
export const at = (e: number, n: number, h: number, { shift }: World = world): Vector3 => [shift[0] + e, shift[1] + n, shift[2] + h];

/** Seeded, uniform in [0, 1): mulberry32. */
export function seeded(seed: number): () => number {
	let a = seed >>> 0;
	return () => {
		a = (a + 0x6d2b79f5) >>> 0;
		let t = Math.imul(a ^ (a >>> 15), a | 1);
		t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
		return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
	};
}

/** Variance 1, from four uniform values. */
export const gaussian = (u: () => number): number => (u() + u() + u() + u() - 2) * Math.sqrt(3);

export const targetPlaces: readonly Vector3[] = [at(-20, -15, 1), at(25, -12, 3), at(22, 30, 2), at(-18, 26, 5), at(4, 8, 9)];

/** Targets measured without error unless errors are given (survey and control, metres). */
export function pairsOf(
	places: readonly Vector3[],
	over: Partial<FitPair> = {},
	error: (index: number) => { survey: Vector3; control: Vector3 } = () => ({ survey: [0, 0, 0], control: [0, 0, 0] }),
): FitPair[] {
	return places.map((place, index) => {
		const { survey, control } = error(index);
		const exact = toSurvey(place);
		return {
			name: `T${index + 1}`,
			survey: [exact[0] + survey[0], exact[1] + survey[1], exact[2] + survey[2]],
			control: [place[0] + control[0], place[1] + control[1], place[2] + control[2]],
			...over,
		};
	});
}

export const withSigma: Partial<FitPair> = { surveySigma: [0.002, 0.002, 0.001], controlSigma: [0.001, 0.001, 0.001] };

export function fitOf(input: FitInput): FitResult {
	const outcome = computeFit(input);
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	return outcome.result;
}

export const exactFit = (): FitResult => fitOf({ fit: 'levelled', pairs: pairsOf(targetPlaces, withSigma) });

export const aSetup = (over: Partial<CheckInputSetup> = {}): CheckInputSetup => ({
	id: 's1',
	name: 'Station 1',
	fit: exactFit(),
	commonMm: 2,
	pointSigmaM: [0.001, 0.001, 0.001],
	...over,
});

export const anElement = (over: Partial<CheckInputElement> = {}): CheckInputElement => ({
	id: 'e1',
	class: 'IfcColumn',
	name: 'Column',
	tag: 'C1',
	storey: 'Ground',
	mark: 'C3-G',
	title: 'Column C/3, ground',
	sizesM: { length: null, height: 3, thickness: 0.4 },
	...over,
});

export const aCheckpoint = (over: Partial<CheckInputCheckpoint> = {}): CheckInputCheckpoint => ({
	id: 'c1',
	elementId: 'e1',
	mark: 'C3-G-E',
	characteristic: 'face',
	place: at(0.2, 0, 1.5),
	direction: [1, 0, 0],
	label: 'East face, 1.5 m above its base',
	surface: null,
	isSoffit: false,
	...over,
});

export const aPoint = (designPlace: Vector3, over: Partial<CheckInputPoint> = {}): CheckInputPoint => ({
	name: 'C3-G-E',
	setupId: 's1',
	surveyPoint: toSurvey(designPlace),
	offsetMm: 0,
	...over,
});

export const aSheet = (over: Partial<ToleranceSheet> = {}): ToleranceSheet => ({
	name: 'C2',
	decision: 'guarded',
	rules: [
		{ id: 'faces', match: { characteristic: 'face' }, lowerMm: -10, upperMm: 10 },
		{ id: 'levels', match: { characteristic: 'level' }, lowerMm: -10, upperMm: 10 },
		{ id: 'plan', match: { characteristic: 'plan' }, lowerMm: null, upperMm: 15 },
	],
	...over,
});

export const aCheck = (over: Partial<CheckInput> = {}): CheckInput => ({
	elements: [anElement()],
	checkpoints: [aCheckpoint()],
	setups: [aSetup()],
	points: [],
	sheet: aSheet(),
	stage: 'as-cast',
	...over,
});
