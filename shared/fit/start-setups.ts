import type { Vector3 } from '#shared/geometry/frame.ts';
import { observationsOf } from './fit-observations.ts';
import type { FitPose } from './fit-pose.ts';
import type { FitInput, FitRefusal } from './fit-schema.ts';
import { fitUnknowns } from './least-pairs.ts';
import { quickFit } from './solve-fit.ts';

/** One standing of the instrument: what it saw, survey frame, metres, with standard deviations over zero. */
export interface SetupSightings {
	name: string;
	fit: 'levelled' | 'free';
	sightings: readonly { mark: string; survey: Vector3; sigma: Vector3 }[];
}

/** A set-up with a pose to start from: place ≈ R·(survey − origin) + shift. */
export interface StartedSetup {
	name: string;
	fit: 'levelled' | 'free';
	pose: FitPose;
	origin: Vector3;
	unknowns: readonly number[];
	sightings: SetupSightings['sightings'];
}

/** Poses and tie marks to start from: set-ups with enough known marks first, then those that can stand on what these saw. */
export function startSetups(
	setups: readonly SetupSightings[],
	places: Map<string, number[]>,
): { ok: true; standings: StartedSetup[] } | { ok: false; refusal: FitRefusal } {
	const waiting = new Set(setups);
	const standings: StartedSetup[] = [];
	for (let progress = true; progress && waiting.size > 0; ) {
		progress = false;
		for (const setup of waiting) {
			const pairs: FitInput['pairs'] = setup.sightings
				.filter(({ mark }) => places.has(mark))
				.map(({ mark, survey }) => ({ name: mark, survey: [...survey], control: [...places.get(mark)!] as [number, number, number] }));
			const observations = observationsOf({ fit: setup.fit, pairs }, pairs);
			const fit = pairs.length > 0 ? quickFit(observations) : null;
			if (!fit) continue;
			const pose = fit.pose;
			for (let k = 0; k < 3; k++) pose.shift[k]! += observations.controlOrigin[k]!;
			const standing = {
				name: setup.name,
				fit: setup.fit,
				pose,
				origin: observations.surveyOrigin,
				unknowns: fitUnknowns(setup.fit),
				sightings: setup.sightings,
			};
			for (const { mark, survey } of setup.sightings) if (!places.has(mark)) places.set(mark, carryWith(pose, standing.origin, survey));
			standings.push(standing);
			waiting.delete(setup);
			progress = true;
		}
	}
	if (waiting.size === 0) return { ok: true, standings };
	return notTied(
		`Set-up ${[...waiting].map(({ name }) => `"${name}"`).join(', ')} shares too few marks with the control and the other set-ups.`,
	);
}

/** The refusal of set-ups that hang in the air. */
export function notTied(message: string): { ok: false; refusal: FitRefusal } {
	return { ok: false, refusal: { code: 'too-few-pairs', message } };
}

/** R·(survey − origin) + shift. */
export function carryWith({ rotation, shift }: FitPose, origin: Vector3, survey: Vector3): number[] {
	const [x, y, z] = [survey[0] - origin[0], survey[1] - origin[1], survey[2] - origin[2]];
	return [0, 1, 2].map((k) => rotation[3 * k]! * x + rotation[3 * k + 1]! * y + rotation[3 * k + 2]! * z + shift[k]!);
}
