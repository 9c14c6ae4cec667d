import { movedSetupFindings, type TargetSight } from '#shared/fit/closing-sight.ts';
import type { PairsOfSetup, Relabelling } from '#shared/fit/contract.ts';
import type { FitPair } from '#shared/fit/fit-schema.ts';
import { isTargetCode, matchMarks } from '#shared/survey/match-marks.ts';

/** A point of a set-up, survey frame, metres; σ already its own or the set-up's. */
export interface SetupPoint {
	name: string;
	/** Line of the file. */
	row: number;
	code: string;
	surveyM: readonly [number, number, number];
	sigmaM: readonly [number, number, number] | null;
}

/** A control point, design frame, metres; a benchmark has no plan. */
export interface ControlMark {
	name: string;
	designM: readonly [number | null, number | null, number | null];
	sigmaPlanM: number | null;
	sigmaHeightM: number | null;
}

type Axes<Value> = [Value, Value, Value];

/**
 * The pairs of a set-up: targets and control points that are the same mark (`matchMarks`), in the order of the control list.
 * Repeats of a target are averaged, σ of the mean = √(Σσ²)/n. σ are used for all pairs or none; `sigmaNote` says why not.
 */
export function pairTargets(
	measured: readonly SetupPoint[],
	marks: readonly ControlMark[],
	relabellings: readonly Relabelling[] = [],
): Omit<PairsOfSetup, 'setupId' | 'controlSetId'> {
	const points = relabelled(measured, relabellings);
	const matches = matchMarks(
		points.map(({ name }) => name),
		marks.map(({ name }) => name),
	);
	const sighted = new Map<string, SetupPoint[]>();
	for (const point of points) {
		const match = matches.get(point.name);
		if (match !== undefined) sighted.set(match.mark, [...(sighted.get(match.mark) ?? []), point]);
	}
	const paired = marks.flatMap((mark) => {
		const sights = sighted.get(mark.name);
		return sights === undefined ? [] : [pairOf(mark, sights)];
	});
	const sigmaNote = whyNoSigma(paired);
	const findings = movedSetupFindings(targetSights(points, matches));
	const unmatched = points.filter(({ name, code }) => isTargetCode(code) && !matches.has(name));
	return {
		pairs: paired.map(({ pair }) => (sigmaNote === null ? pair : { name: pair.name, survey: pair.survey, control: pair.control })),
		controlWithoutTarget: marks.filter(({ name }) => !sighted.has(name)).map(({ name }) => name),
		targetsWithoutControl: [...new Set(unmatched.map(({ name }) => name))],
		sigmaNote,
		notes: [...looseNotes(matches), ...paired.flatMap(({ note }) => note ?? [])],
		loose: {
			targets: looseTargets(points.filter(({ name }) => !matches.has(name))),
			control: marks.flatMap(({ name, designM: [east, north, height] }) =>
				sighted.has(name) || east === null || north === null || height === null
					? []
					: [{ name, point: [east, north, height] as Axes<number> }],
			),
		},
		targets: targetNames(measured, marks, relabellings),
		...(relabellings.length > 0 ? { relabellings: [...relabellings] } : {}),
		...(findings.length > 0 ? { findings } : {}),
	};
}

/** A target that no control point is named like, repeats averaged; survey frame, metres. */
export interface UnknownTarget {
	name: string;
	surveyM: Axes<number>;
	sigmaM: Axes<number> | null;
}

/** The points coded as targets that mean no mark: they tie set-ups that both saw them. */
export function unknownTargets(
	measured: readonly SetupPoint[],
	marks: readonly ControlMark[],
	relabellings: readonly Relabelling[] = [],
): UnknownTarget[] {
	const points = relabelled(measured, relabellings);
	const matches = matchMarks(
		points.map(({ name }) => name),
		marks.map(({ name }) => name),
	);
	const sights = new Map<string, SetupPoint[]>();
	for (const point of points)
		if (isTargetCode(point.code) && !matches.has(point.name)) sights.set(point.name, [...(sights.get(point.name) ?? []), point]);
	return [...sights].map(([name, own]) => ({ name, ...meanSight(own) }));
}

/** Sights of whatever is a target: named like a mark, whose name it then bears, or coded as one. */
function targetSights(points: readonly SetupPoint[], matches: ReturnType<typeof matchMarks>): TargetSight[] {
	return points.flatMap(({ name, code, row, surveyM, sigmaM }) => {
		const mark = matches.get(name)?.mark;
		return mark !== undefined || isTargetCode(code) ? [{ name: mark ?? name, row, surveyM, sigmaM }] : [];
	});
}

/** Points under the names of the marks that they were found to be; one that bears such a mark's name already gives it up. */
function relabelled(points: readonly SetupPoint[], relabellings: readonly Relabelling[]): readonly SetupPoint[] {
	if (relabellings.length === 0) return points;
	const markOf = new Map(relabellings.map(({ target, mark }) => [target, mark]));
	const taken = new Set(markOf.values());
	return points.map((point) => {
		const mark = markOf.get(point.name);
		if (mark !== undefined) return { ...point, name: mark };
		return taken.has(point.name) ? { ...point, name: `${point.name} (as labelled)` } : point;
	});
}

/** Names of the file that mean a mark, are coded as targets, were given a label, or could be targets for want of coded ones. */
function targetNames(measured: readonly SetupPoint[], marks: readonly ControlMark[], relabellings: readonly Relabelling[]): string[] {
	const matches = matchMarks(
		measured.map(({ name }) => name),
		marks.map(({ name }) => name),
	);
	const given = new Set(relabellings.map(({ target }) => target));
	const unmatched = measured.filter(({ name }) => !matches.has(name));
	const could = new Set(looseTargets(unmatched).map(({ name }) => name));
	const isTarget = ({ name, code }: SetupPoint) => matches.has(name) || isTargetCode(code) || given.has(name) || could.has(name);
	return [...new Set(measured.filter(isTarget).map(({ name }) => name))];
}

/** More uncoded points than this are detail, and no match is looked for among them. */
const mostUncoded = 300;

/** Those coded as targets; where none is, all, unless they are too many to be targets. Repeats once, by their first. */
function looseTargets(unmatched: readonly SetupPoint[]): { name: string; point: Axes<number> }[] {
	const coded = unmatched.filter(({ code }) => isTargetCode(code));
	const candidates = coded.length > 0 ? coded : unmatched.length <= mostUncoded ? unmatched : [];
	const firsts = new Map<string, SetupPoint>();
	for (const point of candidates) if (!firsts.has(point.name)) firsts.set(point.name, point);
	return [...firsts.values()].map(({ name, surveyM }) => ({ name, point: [...surveyM] as Axes<number> }));
}

interface Paired {
	pair: FitPair;
	note: string | null;
	lacksSurveySigma: boolean;
	lacksControlSigma: boolean;
}

function pairOf(mark: ControlMark, sights: readonly SetupPoint[]): Paired {
	const { surveyM: survey, sigmaM: surveySigma } = meanSight(sights);
	const given = axes((k) => (k < 2 ? mark.sigmaPlanM : mark.sigmaHeightM));
	const isControlKnown = axes((k) => mark.designM[k] === null || given[k] !== null).every(Boolean);
	// An axis that is not known is not in the fit, so any σ does there.
	const controlSigma = axes((k) => given[k] ?? 0);
	const isWeighable = surveySigma !== null && isControlKnown;
	return {
		pair: { name: mark.name, survey, control: [...mark.designM], ...(isWeighable ? { surveySigma, controlSigma } : {}) },
		note: repeatNote(mark.name, sights),
		lacksSurveySigma: surveySigma === null,
		lacksControlSigma: !isControlKnown,
	};
}

/** The mean of repeats and its σ, √(Σσ²)/n; null where one of them has none. */
function meanSight(sights: readonly SetupPoint[]): { surveyM: Axes<number>; sigmaM: Axes<number> | null } {
	const n = sights.length;
	const first = sights[0]!.surveyM;
	const sigmas = sights.map(({ sigmaM }) => sigmaM);
	return {
		surveyM: axes((k) => first[k] + sights.reduce((sum, { surveyM }) => sum + (surveyM[k] - first[k]), 0) / n),
		sigmaM: sigmas.every((sigma) => sigma !== null)
			? axes((k) => Math.sqrt(sigmas.reduce((sum, sigma) => sum + sigma[k] ** 2, 0)) / n)
			: null,
	};
}

function whyNoSigma(paired: readonly Paired[]): string | null {
	const lacking = (side: 'lacksSurveySigma' | 'lacksControlSigma'): string[] => paired.flatMap((one) => (one[side] ? [one.pair.name] : []));
	const [survey, control] = [lacking('lacksSurveySigma'), lacking('lacksControlSigma')];
	const zero = paired.flatMap(({ pair }) => (isZeroOnBothSides(pair) ? [pair.name] : []));
	const reasons = [
		...(control.length > 0 ? [`the control list gives none for ${listed(control)}`] : []),
		...(survey.length > 0 ? [`neither the survey nor its set-up gives one for ${listed(survey)}`] : []),
		...(zero.length > 0 ? [`it is nil on both sides for ${listed(zero)}`] : []),
	];
	if (reasons.length === 0) return null;
	return `Standard deviations are used for all pairs or for none. Here for none: ${reasons.join('; ')}.`;
}

function isZeroOnBothSides({ surveySigma, controlSigma, control }: FitPair): boolean {
	if (surveySigma === undefined || controlSigma === undefined) return false;
	return axes((k) => control[k] !== null && surveySigma[k] === 0 && controlSigma[k] === 0).some(Boolean);
}

function looseNotes(matches: ReturnType<typeof matchMarks>): string[] {
	return [...matches].flatMap(([name, { mark, isLoose }]) =>
		isLoose ? [`Target “${name}” was taken for control point “${mark}”: they differ only in how they are written.`] : [],
	);
}

/** Repeats are said, and how far apart the two furthest are; whether that is too far is `movedSetupFindings`' to say. */
function repeatNote(name: string, sights: readonly SetupPoint[]): string | null {
	if (sights.length === 1) return null;
	let apartM = 0;
	for (const [i, one] of sights.entries()) {
		for (const other of sights.slice(0, i)) apartM = Math.max(apartM, Math.hypot(...axes((k) => one.surveyM[k] - other.surveyM[k])));
	}
	return `${name} was sighted ${sights.length} times, at most ${(apartM * 1000).toFixed(1)} mm apart; the mean is used.`;
}

function axes<Value>(of: (axis: 0 | 1 | 2) => Value): Axes<Value> {
	return [of(0), of(1), of(2)];
}

function listed(names: readonly string[]): string {
	const shown = names.slice(0, 5).join(', ');
	return names.length > 5 ? `${shown} and ${names.length - 5} more` : shown;
}
