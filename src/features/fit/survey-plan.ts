import { checkpointLimits } from '#shared/check/judge-deviation.ts';
import type { FitKind, FitPair, FitRefusal, FitResult } from '#shared/fit/fit-schema.ts';
import { type PlannedCheckpoint, type PlannedUncertainty, planSurvey, type SurveyPlan } from '#shared/fit/plan-survey.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { classInWords } from '#shared/tolerance/element-words.ts';
import { matchPreparedRule, prepareRules } from '#shared/tolerance/match-rule.ts';
import type { Stage, ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';

/** A mark whose place and σ are known, design frame, metres. */
export interface PlannedMark {
	name: string;
	place: Vector3;
	sigmaPlanM: number;
	sigmaHeightM: number;
}

/** What will be used out there; millimetres, one standard deviation. */
export interface PlannedInstrument {
	fit: Extract<FitKind, 'levelled' | 'free'>;
	targetPlanMm: number;
	targetHeightMm: number;
	shotPlanMm: number;
	shotHeightMm: number;
	commonMm: number;
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

export interface ExpectedSurvey {
	fit: FitResult;
	/** As pairs for the picture: each mark on its place. */
	pairs: FitPair[];
	groups: PlannedGroup[];
	worstFitMm: number;
	neverDecided: number;
	doubtful: number;
	withTolerance: number;
	smallestBlunders: { target: string; metres: number | null }[];
}

/** A checkpoint with the group it is counted in. */
export interface GroupedCheckpoint extends PlannedCheckpoint {
	group: string;
}

/** The model's checkpoints with the tolerance that the sheet sets for each at a stage. Left-out ones are not looked at. */
export function plannedCheckpoints(
	elements: readonly StoredElement[],
	checkpoints: readonly StoredCheckpoint[],
	sheet: ToleranceSheet | null,
	stage: Stage,
): GroupedCheckpoint[] {
	const byId = new Map(elements.map((element) => [element.elementId, element]));
	const rules = prepareRules(sheet?.rules ?? []);
	const widths = new Map<string, number | null>();
	return checkpoints.flatMap(({ elementId, characteristic, place, direction, label, requirement }): GroupedCheckpoint[] => {
		const element = byId.get(elementId);
		if (!element || requirement === 'left-out') return [];
		const key = `${elementId} ${characteristic}`;
		let width = widths.get(key);
		if (width === undefined) {
			const { class: ifcClass, storey, tag, mark, sizesM } = element;
			const matched = matchPreparedRule(rules, { class: ifcClass, characteristic, storey, tag, mark, stage, sizesM });
			const { limitsMm } = checkpointLimits(matched, sizesM, characteristic === 'plan', () => 0);
			width = widthOf(limitsMm, characteristic === 'plan');
			widths.set(key, width);
		}
		const group = `${classInWords(element.class)}, ${characteristic}`;
		return [
			{ name: `${element.title}, ${label}`, place, direction: directionOf(characteristic, direction), toleranceWidthM: width, group },
		];
	});
}

/** Upper less lower limit; of a disc twice its radius; metres. */
function widthOf(limitsMm: readonly [number | null, number | null] | null, isPlan: boolean): number | null {
	if (limitsMm === null) return null;
	const [lower, upper] = limitsMm;
	if (upper !== null && lower !== null) return (upper - lower) / 1000;
	return isPlan && upper !== null ? (2 * upper) / 1000 : null;
}

function directionOf(characteristic: string, direction: Vector3 | null): Vector3 | null {
	if (characteristic === 'plan') return null;
	return direction ?? [0, 0, 1];
}

/** What a survey on these marks can be expected to tell of these checkpoints; a refusal where the marks do not determine the fit. */
export function expectSurvey(
	marks: readonly PlannedMark[],
	instrument: PlannedInstrument,
	checkpoints: readonly GroupedCheckpoint[],
): { ok: true; expected: ExpectedSurvey } | { ok: false; refusal: FitRefusal } {
	const plan = planOf(marks, instrument, checkpoints);
	const planned = planSurvey(plan);
	if (!planned.ok) return planned;
	const groups = groupsOf(checkpoints, planned.checkpoints);
	const sum = (of: (group: PlannedGroup) => number) => groups.reduce((total, group) => total + of(group), 0);
	return {
		ok: true,
		expected: {
			fit: planned.fit,
			pairs: plan.targets.map(({ name, place, controlSigma, surveySigma }) => ({
				name,
				survey: [...place],
				control: [...place],
				surveySigma: [...surveySigma],
				controlSigma: [...controlSigma],
			})),
			groups,
			worstFitMm: worstFitMm(planned.checkpoints),
			neverDecided: sum(({ neverDecided }) => neverDecided),
			doubtful: sum(({ doubtful }) => doubtful),
			withTolerance: planned.checkpoints.filter(({ capability }) => capability !== null).length,
			smallestBlunders: planned.smallestBlunders,
		},
	};
}

function planOf(marks: readonly PlannedMark[], instrument: PlannedInstrument, checkpoints: readonly PlannedCheckpoint[]): SurveyPlan {
	const sighted: Vector3 = [instrument.targetPlanMm / 1000, instrument.targetPlanMm / 1000, instrument.targetHeightMm / 1000];
	return {
		fit: instrument.fit,
		targets: marks.map(({ name, place, sigmaPlanM, sigmaHeightM }) => ({
			name,
			place,
			controlSigma: [sigmaPlanM, sigmaPlanM, sigmaHeightM],
			surveySigma: sighted,
		})),
		pointSigma: [instrument.shotPlanMm / 1000, instrument.shotPlanMm / 1000, instrument.shotHeightMm / 1000],
		commonM: instrument.commonMm / 1000,
		checkpoints,
	};
}

function groupsOf(checkpoints: readonly GroupedCheckpoint[], planned: readonly PlannedUncertainty[]): PlannedGroup[] {
	const groups = new Map<string, { of: GroupedCheckpoint; is: PlannedUncertainty }[]>();
	checkpoints.forEach((of, index) => {
		const is = planned[index];
		if (!is) return;
		const group = groups.get(of.group);
		if (group) group.push({ of, is });
		else groups.set(of.group, [{ of, is }]);
	});
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

function worstFitMm(planned: readonly PlannedUncertainty[]): number {
	return planned.reduce((worst, { fitUncertaintyM }) => Math.max(worst, 2000 * fitUncertaintyM), 0);
}

/** One more target: a known mark that is not sighted yet, or a place where one could be set. */
export interface BestAddition {
	mark: PlannedMark;
	isKnown: boolean;
	/** The worst ± of the fit alone over the checkpoints, mm, without it and with it. */
	beforeMm: number;
	afterMm: number;
}

/** So many checkpoints, those the fit knows worst, stand for all when places are tried. */
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
	checkpoints: readonly PlannedCheckpoint[],
): BestAddition[] {
	const first = planSurvey(planOf(marks, instrument, checkpoints));
	if (!first.ok || checkpoints.length === 0) return [];
	const sample = first.checkpoints
		.map(({ fitUncertaintyM }, index) => ({ fitUncertaintyM, checkpoint: checkpoints[index] }))
		.sort((a, b) => b.fitUncertaintyM - a.fitUncertaintyM)
		.slice(0, mostSampled)
		.flatMap(({ checkpoint }) => checkpoint ?? []);
	const beforeMm = worstFitMm(first.checkpoints);
	const tried = (candidates: readonly PlannedMark[], isKnown: boolean): BestAddition[] => {
		let best: BestAddition | null = null;
		for (const mark of candidates) {
			const planned = planSurvey(planOf([...marks, mark], instrument, sample));
			if (!planned.ok) continue;
			const afterMm = worstFitMm(planned.checkpoints);
			if (best === null || afterMm < best.afterMm) best = { mark, isKnown, beforeMm, afterMm };
		}
		return best ? [best] : [];
	};
	return [...tried(unused, true), ...tried(placesAbout(checkpoints, marks), false)].sort((a, b) => a.afterMm - b.afterMm);
}

function placesAbout(checkpoints: readonly PlannedCheckpoint[], marks: readonly PlannedMark[]): PlannedMark[] {
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
