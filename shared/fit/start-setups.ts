import type { Vector3 } from '#shared/geometry/frame.ts';
import { observationsOf } from './fit-observations.ts';
import type { FitPose } from './fit-pose.ts';
import type { FitInput, FitPair, FitRefusal } from './fit-schema.ts';
import { fitUnknowns } from './least-pairs.ts';
import { quickFit } from './solve-fit.ts';

/** all: whole · plan: its level is not used · level: its plan is not. The last two on levelled set-ups only. */
export type SightingUse = 'all' | 'plan' | 'level';

/**
 * A mark as a set-up saw it, survey frame, metres, σ over zero.
 * @param isHeldBack compared with the adjusted network, never in it
 */
export interface MarkSighting {
	mark: string;
	survey: Vector3;
	sigma: Vector3;
	use?: SightingUse;
	isHeldBack?: boolean;
}

/** A mark known beforehand, control frame, metres, σ over zero; null along an axis that is not known (a benchmark's plan). */
export interface KnownMark {
	mark: string;
	control: readonly [number | null, number | null, number | null];
	sigma: Vector3;
}

/** One standing of the instrument and what it saw. */
export interface SetupSightings {
	name: string;
	fit: 'levelled' | 'free';
	sightings: readonly MarkSighting[];
}

/** A set-up with a pose to start from: place ≈ R·(survey − origin) + shift. */
export interface StartedSetup {
	name: string;
	fit: 'levelled' | 'free';
	pose: FitPose;
	origin: Vector3;
	unknowns: readonly number[];
	sightings: readonly MarkSighting[];
}

/** Where a mark is, as far as it is known yet; metres, control frame less its centre. */
export type StartPlaces = Map<string, (number | null)[]>;

/**
 * Poses and tie marks to start from: set-ups with enough known marks first, then those that can stand on what these saw.
 * @param places of the known marks; filled with those of all others
 */
export function startSetups(
	setups: readonly SetupSightings[],
	places: StartPlaces,
): { ok: true; standings: StartedSetup[] } | { ok: false; refusal: FitRefusal } {
	const waiting = new Set(setups);
	const standings: StartedSetup[] = [];
	for (let progress = true; progress && waiting.size > 0; ) {
		progress = false;
		for (const setup of waiting) {
			const pairs: FitInput['pairs'] = setup.sightings.flatMap((sighting) => startPair(setup.fit, sighting, places) ?? []);
			const observations = observationsOf({ fit: setup.fit, pairs }, pairs);
			const fit = pairs.length > 0 ? quickFit(observations) : null;
			if (!fit) continue;
			const pose = fit.pose;
			for (let k = 0; k < 3; k++) pose.shift[k]! += observations.controlOrigin[k]!;
			const origin = observations.surveyOrigin;
			for (const { mark, survey } of setup.sightings) {
				const carried = carryWith(pose, origin, survey);
				const place = places.get(mark) ?? [null, null, null];
				places.set(
					mark,
					place.map((value, k) => value ?? carried[k]!),
				);
			}
			standings.push({ name: setup.name, fit: setup.fit, pose, origin, unknowns: fitUnknowns(setup.fit), sightings: setup.sightings });
			waiting.delete(setup);
			progress = true;
		}
	}
	if (waiting.size === 0) return { ok: true, standings };
	const names = [...waiting].map(({ name }) => `“${name}”`).join(', ');
	return notTied(
		waiting.size === 1
			? `Set-up ${names} shares too few marks with the control and the other set-ups.`
			: `Set-ups ${names} share too few marks with the control and the other set-ups.`,
	);
}

function startPair(fit: 'levelled' | 'free', { mark, survey, use = 'all' }: MarkSighting, places: StartPlaces): FitPair | null {
	const place = places.get(mark);
	if (place === undefined) return null;
	const [east, north, height] = place as [number | null, number | null, number | null];
	const isPlanKnown = east !== null && north !== null && use !== 'level';
	const isHeightKnown = height !== null && use !== 'plan';
	if (fit === 'free' && !(isPlanKnown && isHeightKnown)) return null;
	if (!isPlanKnown && !isHeightKnown) return null;
	return {
		name: mark,
		survey: [...survey],
		control: [isPlanKnown ? east : null, isPlanKnown ? north : null, isHeightKnown ? height : null],
	};
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
