import type { FitKind, FitPair, FitRefusal, FitResult } from '#shared/fit/fit-schema.ts';
import { type PlannedUncertainty, planSurvey, type SurveyPlan } from '#shared/fit/plan-survey.ts';
import { sightingCovariance, sigmasOf } from '#shared/fit/sighting-covariance.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { GroupedCheckpoint } from './planned-checkpoints.ts';

/** A mark whose place and σ are known, design frame, metres. */
export interface PlannedMark {
	name: string;
	place: Vector3;
	sigmaPlanM: number;
	sigmaHeightM: number;
}

/** Where the instrument will stand, design frame, metres. */
export interface PlannedStation {
	name: string;
	place: Vector3;
}

/** What will be used out there, one standard deviation each. */
export interface PlannedInstrument {
	fit: Extract<FitKind, 'levelled' | 'free'>;
	distanceMm: number;
	distancePpm: number;
	/** Seconds of arc, directions and zenith angles alike. */
	angleSec: number;
	/** A target on its mark. */
	targetMm: number;
	/** Pole and surface of a shot. */
	shotMm: number;
	/** What all points of a set-up share. */
	commonMm: number;
	/** Marks further from a station than this are not sighted from it. */
	reachM: number;
}

/** What can be expected of one kind of checkpoint. Millimetres. */
export interface PlannedGroup {
	name: string;
	count: number;
	medianExpandedMm: number;
	worstExpandedMm: number;
	/** The narrowest tolerance in it; null where no rule sets one. */
	toleranceMm: number | null;
	/** The least Cm (JCGM 106, 7.6). */
	capability: number | null;
	/** Cm under 1: no measurement could ever be called within. */
	neverDecided: number;
	/** Cm from 1 up to 3: some will be too close to call. */
	doubtful: number;
}

/** One checkpoint as it would be known from the station nearest to it. */
export interface ExpectedCheckpoint {
	/** Its place in the list that was asked. */
	key: string;
	of: GroupedCheckpoint;
	is: PlannedUncertainty;
	stationName: string;
	rangeM: number;
}

/** What one station could be fitted by. */
export interface ExpectedStation {
	name: string;
	fit: FitResult;
	/** As pairs for the picture: each sighted mark on its place. */
	pairs: FitPair[];
	smallestBlunders: { target: string; metres: number | null }[];
}

export interface ExpectedSurvey {
	stations: ExpectedStation[];
	checkpoints: ExpectedCheckpoint[];
	groups: PlannedGroup[];
	neverDecided: number;
	doubtful: number;
	withTolerance: number;
}

const secondsRad = Math.PI / (180 * 3600);

/** What a survey on these marks can be expected to tell of these checkpoints, each from the station nearest to it; the station whose marks do not determine a fit. */
export function expectSurvey(
	marks: readonly PlannedMark[],
	instrument: PlannedInstrument,
	stations: readonly PlannedStation[],
	checkpoints: readonly GroupedCheckpoint[],
): { ok: true; expected: ExpectedSurvey } | { ok: false; stationName: string; refusal: FitRefusal } {
	const seen = seenFrom(stations, checkpoints);
	const expected: ExpectedSurvey = { stations: [], checkpoints: [], groups: [], neverDecided: 0, doubtful: 0, withTolerance: 0 };
	for (const [index, station] of stations.entries()) {
		const own = seen[index] ?? [];
		const plan = stationPlan(
			marks,
			instrument,
			station,
			own.map(({ of }) => of),
		);
		const planned = planSurvey(plan);
		if (!planned.ok) return { ok: false, stationName: station.name, refusal: planned.refusal };
		expected.stations.push({
			name: station.name,
			fit: planned.fit,
			pairs: plan.targets.map(({ name, place, controlSigma, surveySigma }) => ({
				name,
				survey: [...place],
				control: [...place],
				surveySigma: [...surveySigma],
				controlSigma: [...controlSigma],
			})),
			smallestBlunders: planned.smallestBlunders,
		});
		own.forEach(({ of, key, rangeM }, place) => {
			const is = planned.checkpoints[place];
			if (is) expected.checkpoints.push({ key, of, is, stationName: station.name, rangeM });
		});
	}
	expected.groups = groupsOf(expected.checkpoints);
	for (const { neverDecided, doubtful } of expected.groups) {
		expected.neverDecided += neverDecided;
		expected.doubtful += doubtful;
	}
	expected.withTolerance = expected.checkpoints.filter(({ is }) => is.capability !== null).length;
	return { ok: true, expected };
}

/** The plan of one station: the marks in its reach, σ by range and angle, and the checkpoints that are seen from it. */
export function stationPlan(
	marks: readonly PlannedMark[],
	instrument: PlannedInstrument,
	station: PlannedStation,
	checkpoints: readonly GroupedCheckpoint[],
): SurveyPlan {
	const polar = {
		distanceM: instrument.distanceMm / 1000,
		distancePpm: instrument.distancePpm,
		angleRad: instrument.angleSec * secondsRad,
	};
	return {
		fit: instrument.fit,
		targets: marks
			.filter(({ place }) => rangeBetween(place, station.place) <= instrument.reachM)
			.map(({ name, place, sigmaPlanM, sigmaHeightM }) => ({
				name,
				place,
				controlSigma: [sigmaPlanM, sigmaPlanM, sigmaHeightM],
				surveySigma: sigmasOf(sightingCovariance(polar, station.place, place, instrument.targetMm / 1000)),
			})),
		commonM: instrument.commonMm / 1000,
		checkpoints: checkpoints.map((checkpoint) => ({
			...checkpoint,
			shotCovariance: sightingCovariance(polar, station.place, checkpoint.place, instrument.shotMm / 1000),
		})),
	};
}

/** The checkpoints by station: each is taken to be shot from the nearest. */
export function seenFrom(
	stations: readonly PlannedStation[],
	checkpoints: readonly GroupedCheckpoint[],
): { key: string; of: GroupedCheckpoint; rangeM: number }[][] {
	const seen = stations.map((): { key: string; of: GroupedCheckpoint; rangeM: number }[] => []);
	checkpoints.forEach((of, index) => {
		let best = { station: -1, rangeM: Number.POSITIVE_INFINITY };
		stations.forEach(({ place }, station) => {
			const rangeM = rangeBetween(place, of.place);
			if (rangeM < best.rangeM) best = { station, rangeM };
		});
		seen[best.station]?.push({ key: String(index), of, rangeM: best.rangeM });
	});
	return seen;
}

function rangeBetween(a: Vector3, b: Vector3): number {
	return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
}

function groupsOf(checkpoints: readonly ExpectedCheckpoint[]): PlannedGroup[] {
	const groups = new Map<string, ExpectedCheckpoint[]>();
	for (const checkpoint of checkpoints) {
		const group = groups.get(checkpoint.of.group);
		if (group) group.push(checkpoint);
		else groups.set(checkpoint.of.group, [checkpoint]);
	}
	return [...groups].map(([name, members]): PlannedGroup => {
		const expanded = members.map(({ is }) => 1000 * is.expandedM).sort((a, b) => a - b);
		const widths = members.flatMap(({ of }) => (of.toleranceWidthM === null ? [] : [1000 * of.toleranceWidthM]));
		const capabilities = members.flatMap(({ is }) => (is.capability === null ? [] : [is.capability]));
		return {
			name,
			count: members.length,
			medianExpandedMm: expanded[Math.floor(expanded.length / 2)] ?? 0,
			worstExpandedMm: expanded.at(-1) ?? 0,
			toleranceMm: widths.length > 0 ? widths.reduce((least, width) => Math.min(least, width)) : null,
			capability: capabilities.length > 0 ? capabilities.reduce((least, value) => Math.min(least, value)) : null,
			neverDecided: capabilities.filter((value) => value < 1).length,
			doubtful: capabilities.filter((value) => value >= 1 && value < 3).length,
		};
	});
}

/** The worst ± of the fit alone over checkpoints, mm. */
export function worstFitMm(planned: readonly PlannedUncertainty[]): number {
	return planned.reduce((worst, { fitUncertaintyM }) => Math.max(worst, 2000 * fitUncertaintyM), 0);
}
