import { planSurvey } from '#shared/fit/plan-survey.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { GroupedCheckpoint } from './planned-checkpoints.ts';
import { type PlannedInstrument, type PlannedMark, type PlannedStation, seenFrom, stationPlan, worstFitMm } from './survey-plan.ts';

/** One more target: a known mark that is not sighted yet, or a place where one could be set. */
export interface BestAddition {
	mark: PlannedMark;
	isKnown: boolean;
	/** The worst ± of the fit alone over the checkpoints, mm, without it and with it. */
	beforeMm: number;
	afterMm: number;
}

/** So many checkpoints of a station, those its fit knows worst, stand for all when places are tried. */
const mostSampled = 60;
/** Places tried along each side. */
const gridSteps = 6;

/**
 * Where one more target would help most: every mark not yet sighted and a grid of places about the work are tried, and the best of each
 * kind answered, the most helpful first. Half of the extent beyond the checkpoints is tried too, since a fit is best held from outside.
 */
export function bestAdditions(
	marks: readonly PlannedMark[],
	unused: readonly PlannedMark[],
	instrument: PlannedInstrument,
	stations: readonly PlannedStation[],
	checkpoints: readonly GroupedCheckpoint[],
): BestAddition[] {
	const samples = seenFrom(stations, checkpoints).map((seen, index): GroupedCheckpoint[] => {
		const station = stations[index];
		if (!station) return [];
		const own = seen.map(({ of }) => of);
		const planned = planSurvey(stationPlan(marks, instrument, station, own));
		if (!planned.ok) return own.slice(0, mostSampled);
		return planned.checkpoints
			.map(({ fitUncertaintyM }, place) => ({ fitUncertaintyM, checkpoint: own[place] }))
			.sort((a, b) => b.fitUncertaintyM - a.fitUncertaintyM)
			.slice(0, mostSampled)
			.flatMap(({ checkpoint }) => checkpoint ?? []);
	});
	/** The worst over all stations; null where one has no fit. */
	const worstWith = (sighted: readonly PlannedMark[]): number | null => {
		let worst = 0;
		for (const [index, station] of stations.entries()) {
			const planned = planSurvey(stationPlan(sighted, instrument, station, samples[index] ?? []));
			if (!planned.ok) return null;
			worst = Math.max(worst, worstFitMm(planned.checkpoints));
		}
		return worst;
	};
	const beforeMm = worstWith(marks);
	if (beforeMm === null || checkpoints.length === 0) return [];
	const tried = (candidates: readonly PlannedMark[], isKnown: boolean): BestAddition[] => {
		let best: BestAddition | null = null;
		for (const mark of candidates) {
			const afterMm = worstWith([...marks, mark]);
			if (afterMm !== null && afterMm < beforeMm && (best === null || afterMm < best.afterMm)) best = { mark, isKnown, beforeMm, afterMm };
		}
		return best ? [best] : [];
	};
	return [...tried(unused, true), ...tried(placesAbout(checkpoints, marks), false)].sort((a, b) => a.afterMm - b.afterMm);
}

function placesAbout(checkpoints: readonly GroupedCheckpoint[], marks: readonly PlannedMark[]): PlannedMark[] {
	const range = (axis: 0 | 1) => {
		const values = checkpoints.map(({ place }) => place[axis]);
		const least = values.reduce((a, b) => Math.min(a, b), Number.POSITIVE_INFINITY);
		const most = values.reduce((a, b) => Math.max(a, b), Number.NEGATIVE_INFINITY);
		const beyond = (most - least) / 4;
		return { from: least - beyond, step: (most - least + 2 * beyond) / (gridSteps - 1) };
	};
	const [east, north] = [range(0), range(1)];
	const height = marks.reduce((sum, { place }) => sum + place[2], 0) / Math.max(1, marks.length);
	const usual = marks[0] ?? { sigmaPlanM: 0.001, sigmaHeightM: 0.001 };
	return Array.from({ length: gridSteps * gridSteps }, (_, index) => {
		const place: Vector3 = [east.from + (index % gridSteps) * east.step, north.from + Math.floor(index / gridSteps) * north.step, height];
		return { name: 'a new mark', place, sigmaPlanM: usual.sigmaPlanM, sigmaHeightM: usual.sigmaHeightM };
	});
}
