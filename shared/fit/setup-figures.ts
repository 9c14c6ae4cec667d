import { chiSquareQuantile } from '#shared/geometry/chi-square.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { twoSidedNormal } from '#shared/geometry/normal-distribution.ts';
import { toMatrix3 } from '#shared/geometry/rotation.ts';
import { carriedPointCovariance, carryPoint, fitCovarianceAt } from './carry-point.ts';
import type { Finding, FitPairResult, FitResult } from './fit-schema.ts';
import { sidakLevel } from './fit-trial.ts';
import { DELTA_0, NORMAL_CRITICAL } from './pair-reliability.ts';
import { type KnownAt, knownRows, type ObservationRow, rowCofactor, type Standing, sightingRows } from './setup-equations.ts';
import { carryWith, type KnownMark, type MarkSighting } from './start-setups.ts';

/** The figures of set-ups adjusted together. Metres, control frame. */

/**
 * One target in one set-up.
 * @param residual where the set-up puts it less where all together put it
 * @param redundancy of its rows, 0 … 3
 * @param normalised the largest |correction|/σ of its rows, held against 3.29; null where nothing controls it
 */
export interface TieFigure {
	setup: string;
	mark: string;
	isKnown: boolean;
	residual: [number, number, number];
	redundancy: number;
	normalised: number | null;
}

/**
 * @param fits of each set-up, as computeFit gives them, but from all observations together: carry-point.ts works on them. Pairs hold the misfits of known marks
 * @param marks adjusted places of all marks, also of those that only tie set-ups together
 * @param between J_p·covariance·J_qᵀ is the covariance of a place p of set-up `a` and a place q of set-up `b`; rows the unknowns of `a`, columns of `b`
 */
export interface AdjustedSetups {
	fits: { setup: string; fit: FitResult }[];
	marks: { mark: string; place: Vector3; sigma: Vector3; isKnown: boolean; normalised: number | null }[];
	ties: TieFigure[];
	between: { a: string; b: string; covariance: number[][] }[];
	redundancy: number;
	varianceFactor: number | null;
	chiSquare: FitResult['chiSquare'];
}

interface Solved {
	standings: readonly Standing[];
	place: readonly number[][];
	marks: readonly string[];
	known: readonly KnownAt[];
	centre: Vector3;
	cofactor: Float64Array;
	objective: number;
	redundancy: number;
	heldBack: readonly { setup: string; sightings: readonly MarkSighting[] }[];
	heldKnown: readonly KnownMark[];
	confidence: number;
}

/** All that is printed of the adjusted set-ups, from Q and the rows at the end. */
export function describeSetups(solved: Solved): AdjustedSetups {
	const { standings, place, marks, known, centre, cofactor, objective, redundancy, confidence } = solved;
	const size = Math.sqrt(cofactor.length);
	const varianceFactor = redundancy > 0 ? objective / redundancy : null;
	const lower = redundancy > 0 ? chiSquareQuantile((1 - confidence) / 2, redundancy) : 0;
	const upper = redundancy > 0 ? chiSquareQuantile((1 + confidence) / 2, redundancy) : 0;
	const chiSquare = redundancy > 0 ? { statistic: objective, lower, upper, passes: objective >= lower && objective <= upper } : null;
	const knownOf = new Map(known.map((one) => [one.mark, one]));
	const testOf = (rows: readonly ObservationRow[]) => testRows(rows, cofactor, size);
	const rowCount = redundancy + size;
	const fits = standings.map((standing) => {
		const { name, fit, pose, origin, unknowns, at } = standing;
		const pairs: FitPairResult[] = [];
		const ties: TieFigure[] = [];
		let square = 0;
		for (const sighting of standing.sightings) {
			const carried = carryWith(pose, origin, sighting.survey);
			const test = testOf(sightingRows(standing, sighting, place[sighting.mark]!));
			const control = knownOf.get(sighting.mark)?.control;
			const residual = carried.map((value, k) => value - place[sighting.mark]![k]!) as [number, number, number];
			square += residual.reduce((total, value) => total + value * value, 0);
			const mark = marks[sighting.mark]!;
			ties.push({
				setup: name,
				mark,
				isKnown: control !== undefined,
				residual,
				redundancy: test.redundancy,
				normalised: test.normalised,
			});
			if (control === undefined) continue;
			pairs.push({
				name: mark,
				residual: control.map((value, k) => (value === null ? null : carried[k]! - value)) as FitPairResult['residual'],
				redundancy: test.redundancy,
				normalised: test.normalised,
				critical: test.normalised === null ? null : NORMAL_CRITICAL,
				smallestBlunder: test.smallestBlunder,
				leaveOneOut: null,
				heldBack: false,
			});
		}
		const shift = [0, 1, 2].map((k) => pose.shift[k]! + centre[k]!) as [number, number, number];
		const { rotation: r } = pose;
		const result: FitResult = {
			fit,
			scale: 1,
			rotation: toMatrix3(r) as FitResult['rotation'],
			translation: [0, 1, 2].map(
				(k) => shift[k]! - (r[3 * k]! * origin[0] + r[3 * k + 1]! * origin[1] + r[3 * k + 2]! * origin[2]),
			) as FitResult['translation'],
			origin: [...origin],
			shift,
			sigmaGiven: true,
			parameterCovariance: blockOf(cofactor, size, { at, unknowns }, { at, unknowns }),
			// Against the control, as of any fit; against what all say where the set-up saw no control.
			rms: pairs.length > 0 ? rmsOf(pairs) : Math.sqrt(square / Math.max(standing.sightings.length, 1)),
			redundancy,
			varianceFactor,
			chiSquare,
			pairs,
			carried: [],
			findings: contradictions(ties, rowCount),
		};
		const held = solved.heldBack.find(({ setup }) => setup === name)?.sightings ?? [];
		pairs.push(...held.flatMap((sighting) => heldBackPair(result, sighting, solved.heldKnown) ?? []));
		return { setup: name, fit: result, ties };
	});
	return {
		fits: fits.map(({ setup, fit }) => ({ setup, fit })),
		ties: fits.flatMap(({ ties }) => ties),
		marks: marks.map((mark, i) => ({
			mark,
			place: [0, 1, 2].map((k) => place[i]![k]! + centre[k]!) as unknown as Vector3,
			sigma: [0, 1, 2].map((k) => Math.sqrt(cofactor[(3 * i + k) * (size + 1)]!)) as unknown as Vector3,
			isKnown: knownOf.has(i),
			normalised: knownOf.has(i) ? testOf(knownRows(knownOf.get(i)!, place[i]!)).normalised : null,
		})),
		between: standings.flatMap((a, i) =>
			standings.slice(0, i).map((b) => ({ a: b.name, b: a.name, covariance: blockOf(cofactor, size, b, a) })),
		),
		redundancy,
		varianceFactor,
		chiSquare,
	};
}

function rmsOf(pairs: readonly FitPairResult[]): number {
	const square = pairs.reduce((sum, { residual }) => sum + residual.reduce<number>((total, value) => total + (value ?? 0) ** 2, 0), 0);
	return Math.sqrt(square / pairs.length);
}

type Unknowns = Pick<Standing, 'at' | 'unknowns'>;

function blockOf(cofactor: Float64Array, size: number, rows: Unknowns, columns: Unknowns): number[][] {
	return rows.unknowns.map((_, i) => columns.unknowns.map((_unknown, j) => cofactor[(rows.at + i) * size + columns.at + j]!));
}

/** Under this share of its variance left as redundancy a row counts as uncontrolled. */
const leastRedundancy = 1e-9;

function testRows(
	rows: readonly ObservationRow[],
	cofactor: Float64Array,
	size: number,
): { redundancy: number; normalised: number | null; smallestBlunder: number | null } {
	let redundancy = 0;
	let normalised: number | null = null;
	let smallestBlunder: number | null = null;
	for (const { terms, misclosure, sigma } of rows) {
		const part = 1 - rowCofactor(terms, cofactor, size) / sigma ** 2;
		if (!(part > leastRedundancy)) continue;
		redundancy += part;
		normalised = Math.max(normalised ?? 0, Math.abs(misclosure) / (sigma * Math.sqrt(part)));
		smallestBlunder = Math.max(smallestBlunder ?? 0, (DELTA_0 * sigma) / Math.sqrt(part));
	}
	return { redundancy, normalised, smallestBlunder };
}

/** A held-back sighting against its mark: σ of the misfit is fit, sighting and mark together, none of which rests on another. */
function heldBackPair(
	fit: FitResult,
	{ mark, survey, sigma, use = 'all' }: MarkSighting,
	known: readonly KnownMark[],
): FitPairResult | null {
	const its = known.find((one) => one.mark === mark);
	if (its === undefined) return null;
	const carried = carryPoint(fit, survey);
	const [ofFit, ofPoint] = [fitCovarianceAt(fit, survey), carriedPointCovariance(fit, sigma)];
	const axes = [0, 1, 2].map((k) => {
		const control = its.control[k]!;
		if (control === null || (use === 'plan' && k === 2) || (use === 'level' && k < 2)) return null;
		return { misfit: carried[k]! - control, sigma: Math.sqrt(ofFit[k]![k]! + ofPoint[k]![k]! + its.sigma[k]! ** 2) };
	});
	return {
		name: mark,
		residual: axes.map((one) => one?.misfit ?? null) as FitPairResult['residual'],
		redundancy: null,
		normalised: Math.max(...axes.map((one) => (one === null ? 0 : Math.abs(one.misfit) / one.sigma))),
		critical: NORMAL_CRITICAL,
		smallestBlunder: null,
		leaveOneOut: null,
		heldBack: true,
		sigma: axes.map((one) => one?.sigma ?? null) as NonNullable<FitPairResult['sigma']>,
	};
}

/** Targets whose correction is beyond what chance gives among so many rows (Šidák 1967). The worst first; which of two that tie is wrong, no row says. */
function contradictions(ties: readonly TieFigure[], rowCount: number): Finding[] {
	const critical = twoSidedNormal(sidakLevel(rowCount));
	const beyond = ties.filter(({ normalised }) => normalised !== null && normalised > critical);
	return beyond
		.sort((a, b) => b.normalised! - a.normalised!)
		.slice(0, 3)
		.map(({ mark, normalised, residual }) => ({
			code: 'tie-contradiction',
			pairs: [mark],
			message: `“${mark}” as seen from this set-up does not fit what the others and the control say: its correction is ${normalised!.toFixed(1)} times its σ, ${(Math.hypot(...residual) * 1000).toFixed(1)} mm in all. The error may lie here or in another sighting of it.`,
			evidence: { normalised, critical, residualM: residual },
		}));
}
