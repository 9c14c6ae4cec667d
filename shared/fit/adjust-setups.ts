import { invertPositiveDefinite } from '#shared/geometry/cholesky.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { movePose } from './fit-pose.ts';
import type { FitRefusal } from './fit-schema.ts';
import { formSetupSystem, type KnownAt, type Standing } from './setup-equations.ts';
import { type AdjustedSetups, describeSetups } from './setup-figures.ts';
import { type KnownMark, notTied, type SetupSightings, type StartPlaces, startSetups } from './start-setups.ts';

/** More unknowns than this would keep everybody waiting: about 150 marks and twenty set-ups. */
const mostUnknowns = 600;
const mostSteps = 50;

/**
 * Set-ups tied by common targets, adjusted together: a set-up with too little control of its own stands by marks that another one saw
 * (combined adjustment of observation equations, Mikhail & Gracie 1981; Ghilani & Wolf 2017). Unknowns are the pose of each set-up and the place of each mark;
 * observations are all sightings, in their own frames, and all known marks, so nothing is fixed that has an error. Scale is 1.
 * Marks that are neither known nor seen by two set-ups tell nothing and are left out. A mark held back in one set-up is so in all.
 * @returns `too-few-pairs` where a set-up is tied by fewer than the least marks, `bad-sigma` for a σ that is not over zero,
 * `bad-input` for too many unknowns, `no-solution` where the steps do not end
 */
export function adjustSetups(
	given: readonly SetupSightings[],
	allKnown: readonly KnownMark[],
	confidence = 0.95,
): { ok: true; adjusted: AdjustedSetups } | { ok: false; refusal: FitRefusal } {
	const setups = usefulSightings(given, new Set(allKnown.map(({ mark }) => mark)));
	const live = setups.map((setup) => ({ ...setup, sightings: setup.sightings.filter(({ isHeldBack }) => !isHeldBack) }));
	const sighted = new Set(live.flatMap(({ sightings }) => sightings.map(({ mark }) => mark)));
	const held = new Set(setups.flatMap(({ sightings }) => sightings.flatMap(({ mark, isHeldBack }) => (isHeldBack ? [mark] : []))));
	const known = allKnown.filter(({ mark }) => sighted.has(mark));
	const bad =
		setups.flatMap(({ sightings }) => sightings).find(({ sigma }) => !sigma.every((value) => value > 0)) ??
		allKnown.find(
			({ mark, control, sigma }) => (sighted.has(mark) || held.has(mark)) && sigma.some((value, k) => control[k] !== null && !(value > 0)),
		);
	if (bad !== undefined) {
		return {
			ok: false,
			refusal: {
				code: 'bad-sigma',
				message: `Set-ups adjusted together need standard deviations over zero for every sighting and every known mark; “${bad.mark}” has none.`,
				where: bad.mark,
			},
		};
	}
	const centre = meanOf(known.map(({ control }) => control));
	const centred = (control: KnownMark['control']): (number | null)[] =>
		control.map((value, k) => (value === null ? null : value - centre[k]!));
	const places: StartPlaces = new Map(known.map(({ mark, control }) => [mark, centred(control)]));
	const started = startSetups(live, places);
	if (!started.ok) return started;
	const marks = [...places.keys()];
	const place = marks.map((mark) => places.get(mark)!.map((value) => value ?? 0));
	const markOf = new Map(marks.map((mark, i) => [mark, i]));
	let size = 3 * marks.length;
	const standings = started.standings.map(({ sightings, ...rest }): Standing => {
		const at = size;
		size += rest.unknowns.length;
		return { ...rest, at, sightings: sightings.map((sighting) => ({ ...sighting, mark: markOf.get(sighting.mark)! })) };
	});
	const knownAt = known.map(({ mark, control, sigma }): KnownAt => ({ mark: markOf.get(mark)!, control: centred(control), sigma }));
	if (size === 0) return notTied('There is nothing to adjust.');
	if (size > mostUnknowns) return tooMany(size);
	const end = iterate(size, place, standings, knownAt);
	if (end === 'loose') return notTied('The set-ups are not tied to one another and to the control well enough.');
	if (end === 'restless') return restless();
	const heldBack = setups.map(({ name, sightings }) => ({ setup: name, sightings: sightings.filter(({ isHeldBack }) => isHeldBack) }));
	const heldKnown = allKnown.filter(({ mark }) => held.has(mark));
	return {
		ok: true,
		adjusted: describeSetups({ standings, place, marks, known: knownAt, centre, heldBack, heldKnown, confidence, ...end }),
	};
}

/** @returns Q, the weighted sum of squares and the redundancy at the end; places and poses are moved there */
function iterate(
	size: number,
	place: number[][],
	standings: readonly Standing[],
	known: readonly KnownAt[],
): { cofactor: Float64Array; objective: number; redundancy: number } | 'loose' | 'restless' {
	for (let round = 0; round < mostSteps; round++) {
		const { normal, gradient, sum, rowCount, open } = formSetupSystem(size, place, standings, known);
		if (!invertPositiveDefinite(normal, size)) return 'loose';
		const step = Array.from({ length: size }, (_, row) => {
			let total = 0;
			for (let column = 0; column < size; column++) total += normal[row * size + column]! * gradient[column]!;
			return total;
		});
		const largest = Math.max(...step.map(Math.abs));
		if (!Number.isFinite(largest)) return 'restless';
		if (largest < 1e-10) return { cofactor: normal, objective: sum, redundancy: rowCount - size + open };
		place.forEach((at, i) => {
			for (let k = 0; k < 3; k++) at[k]! += step[3 * i + k]!;
		});
		for (const { pose, unknowns, at } of standings) {
			const change = new Float64Array(7);
			unknowns.forEach((unknown, i) => {
				change[unknown] = step[at + i]!;
			});
			movePose(pose, change);
		}
	}
	return 'restless';
}

/** Without marks that only one set-up saw and nobody knows, and with every sighting of a held-back mark held back. */
function usefulSightings(setups: readonly SetupSightings[], known: ReadonlySet<string>): SetupSightings[] {
	const seenBy = new Map<string, number>();
	const held = new Set<string>();
	for (const { sightings } of setups) {
		for (const mark of new Set(sightings.map((sighting) => sighting.mark))) seenBy.set(mark, (seenBy.get(mark) ?? 0) + 1);
		for (const { mark, isHeldBack } of sightings) if (isHeldBack) held.add(mark);
	}
	return setups.map((setup) => ({
		...setup,
		sightings: setup.sightings
			.filter(({ mark }) => known.has(mark) || ((seenBy.get(mark) ?? 0) > 1 && !held.has(mark)))
			.map((sighting) => ({ ...sighting, isHeldBack: held.has(sighting.mark) })),
	}));
}

function tooMany(size: number): { ok: false; refusal: FitRefusal } {
	const message = `These set-ups have ${size} unknowns together, more than the ${mostUnknowns} that are adjusted at once. Set targets aside, or adjust fewer set-ups together.`;
	return { ok: false, refusal: { code: 'bad-input', message } };
}

function restless(): { ok: false; refusal: FitRefusal } {
	const message =
		'The adjustment of these set-ups comes to no end: their targets contradict each other grossly. Fit each by itself first and set aside what is off.';
	return { ok: false, refusal: { code: 'no-solution', message } };
}

function meanOf(points: readonly KnownMark['control'][]): Vector3 {
	return [0, 1, 2].map((k) => {
		const values = points.flatMap((point) => point[k] ?? []);
		const first = values[0] ?? 0;
		return first + values.reduce((sum, value) => sum + (value - first), 0) / Math.max(values.length, 1);
	}) as unknown as Vector3;
}
