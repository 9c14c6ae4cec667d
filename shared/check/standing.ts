import type { Finding } from '../fit/fit-schema.ts';
import { plainMm } from '../tolerance/millimetre-text.ts';
import type { Stage } from '../tolerance/sheet-schema.ts';
import { apartMm } from './apart.ts';
import type { Deviation } from './check-schema.ts';
import { counted, nameList } from './name-list.ts';

/** One checkpoint in one published check. Deviations as `Deviation` says: millimetres, places in metres, design frame. */
export interface Measurement {
	readonly checkId: string;
	readonly checkNumber: number;
	readonly surveyId: string;
	readonly surveyNumber: number;
	readonly surveyName: string;
	/** The day of the survey, milliseconds UTC. Surveys of one day stand in the order of their numbers. */
	readonly measuredAt: number;
	readonly stage: Stage;
	/** The model and the element in it, by what outlives a revision. */
	readonly modelId: string;
	readonly globalId: string;
	/** The fit that carried it is still the adopted one of its set-up; of a point that was not measured: true. */
	readonly isFitAdopted: boolean;
	/** A second person has checked that fit. */
	readonly isFitChecked: boolean;
	readonly deviation: Deviation;
}

/** Two surveys of the same stage that tell different things of one checkpoint. Millimetres. */
export interface Disagreement {
	readonly earlier: Measurement;
	readonly later: Measurement;
	readonly apartMm: number;
	/** U of the difference: √(U₁² + U₂²); in plan taken along it. */
	readonly togetherMm: number;
}

/** What all published checks together say of one checkpoint. */
export interface CheckpointStanding {
	readonly modelId: string;
	readonly globalId: string;
	readonly checkpointId: string;
	/** The newest measurement on an adopted fit; where nothing was measured on one, the newest that says why not. */
	readonly newest: Measurement;
	/** The survey that is farthest from the newest, in U; never averaged with it. */
	readonly disagreement: Disagreement | null;
	/** One entry a survey that measured it, oldest first, whatever became of its fit. */
	readonly trend: readonly Measurement[];
	/** Newer than `newest`, but on a fit that is adopted no more. */
	readonly passedOver: readonly Measurement[];
}

export interface StandingOptions {
	/** When an element is known to have been worked on (a flag put right), ms UTC: surveys before and after it are meant to differ. */
	readonly workedOnAt?: (modelId: string, globalId: string) => number | null;
}

/** Negative where `a` is older: by day, then by the survey's number, then (the same survey checked again) by the check's. */
function byAge(a: Measurement, b: Measurement): number {
	return a.measuredAt - b.measuredAt || a.surveyNumber - b.surveyNumber || a.checkNumber - b.checkNumber;
}

/** Of each survey only its newest check: the same points judged again are no second measurement. */
function oncePerSurvey(sorted: readonly Measurement[]): Measurement[] {
	const bySurvey = new Map<string, Measurement>();
	for (const one of sorted) {
		const kept = bySurvey.get(one.surveyId);
		// A check whose fit was replaced gives way to one on the adopted fit, whichever was made first.
		if (kept === undefined || one.isFitAdopted || !kept.isFitAdopted) bySurvey.set(one.surveyId, one);
	}
	return [...bySurvey.values()].sort(byAge);
}

function disagreementWith(later: Measurement, earlier: readonly Measurement[], workedOnAt: number | null): Disagreement | null {
	let worst: Disagreement | null = null;
	for (const one of earlier) {
		if (one.stage !== later.stage) continue;
		if (workedOnAt !== null && one.measuredAt <= workedOnAt && later.measuredAt >= workedOnAt) continue;
		const apart = apartMm(one.deviation, later.deviation);
		if (apart === null || apart.apartMm <= apart.togetherMm) continue;
		if (worst === null || apart.apartMm * worst.togetherMm > worst.apartMm * apart.togetherMm) worst = { earlier: one, later, ...apart };
	}
	return worst;
}

/**
 * The state of each checkpoint from all published checks: the newest measurement on an adopted fit counts, whole, with its survey; earlier ones
 * are kept as its trend. Give the measurements of the stages that are asked about; those of different stages are never held against each other.
 * In the order in which checkpoints first come.
 */
export function standingOf(measurements: readonly Measurement[], { workedOnAt }: StandingOptions = {}): CheckpointStanding[] {
	const groups = new Map<string, Measurement[]>();
	for (const one of measurements) {
		const key = `${one.modelId}\n${one.deviation.checkpointId}`;
		const group = groups.get(key);
		if (group === undefined) groups.set(key, [one]);
		else group.push(one);
	}
	return [...groups.values()].map((group) => {
		const sorted = group.sort(byAge);
		const trend = oncePerSurvey(sorted.filter(({ deviation }) => deviation.deviationMm !== null));
		const counting = trend.filter(({ isFitAdopted }) => isFitAdopted);
		const measured = counting.at(-1);
		const newest = measured ?? sorted.findLast(({ deviation }) => deviation.deviationMm === null) ?? sorted.at(-1)!;
		const { modelId, globalId } = newest;
		return {
			modelId,
			globalId,
			checkpointId: newest.deviation.checkpointId,
			newest,
			disagreement:
				measured === undefined ? null : disagreementWith(measured, counting.slice(0, -1), workedOnAt?.(modelId, globalId) ?? null),
			trend,
			passedOver: trend.filter((one) => !one.isFitAdopted && byAge(one, newest) > 0),
		};
	});
}

/**
 * Surveys that tell different things, one finding for each two of them: a cause common to a survey (its control, its set-up) is looked for once,
 * not at each point. `markOf` names an element for people.
 */
export function disagreementFindings(
	standings: readonly CheckpointStanding[],
	markOf: (modelId: string, globalId: string) => string,
): Finding[] {
	const byPair = new Map<string, { apart: Disagreement; standing: CheckpointStanding }[]>();
	for (const standing of standings) {
		const { disagreement: apart } = standing;
		if (apart === null) continue;
		const key = `${apart.earlier.surveyId} ${apart.later.surveyId}`;
		byPair.set(key, [...(byPair.get(key) ?? []), { apart, standing }]);
	}
	return [...byPair.values()].map((found) => {
		const [worst] = found.toSorted((a, b) => b.apart.apartMm - a.apart.apartMm) as [(typeof found)[number]];
		const { earlier, later, apartMm: mm, togetherMm } = worst.apart;
		const marks = [...new Set(found.map(({ standing }) => markOf(standing.modelId, standing.globalId)))];
		return {
			code: 'surveys-disagree',
			pairs: marks,
			message: `Surveys ${earlier.surveyNumber} and ${later.surveyNumber} are apart by more than their U together at ${counted(found.length, 'point')} (${nameList(marks)}), most by ${plainMm(mm, 0)} mm where ${plainMm(togetherMm, 0)} are known. Survey ${later.surveyNumber}, the newer, is what counts; look for what happened between the two.`,
			evidence: {
				earlierSurvey: earlier.surveyNumber,
				laterSurvey: later.surveyNumber,
				count: found.length,
				apartMm: mm,
				togetherMm,
			},
		};
	});
}
