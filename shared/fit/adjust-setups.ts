import { chiSquareQuantile } from '#shared/geometry/chi-square.ts';
import { invertPositiveDefinite } from '#shared/geometry/cholesky.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { toMatrix3 } from '#shared/geometry/rotation.ts';
import { movePose } from './fit-pose.ts';
import type { FitRefusal, FitResult } from './fit-schema.ts';
import { carryWith, notTied, type SetupSightings, type StartedSetup, startSetups } from './start-setups.ts';

/** A mark known beforehand, control frame, metres, σ over zero. */
export interface KnownMark {
	mark: string;
	control: Vector3;
	sigma: Vector3;
}

/**
 * @param fits of each set-up, as computeFit gives them, but from all observations together: carry-point.ts works on them. Pairs hold the misfits of known marks
 * @param marks adjusted places and covariances of all marks, also of those that only tie set-ups together
 */
export interface AdjustedSetups {
	fits: { setup: string; fit: FitResult }[];
	marks: { mark: string; place: Vector3; sigma: Vector3 }[];
	redundancy: number;
	varianceFactor: number | null;
	chiSquare: FitResult['chiSquare'];
}

interface Standing extends Omit<StartedSetup, 'sightings'> {
	/** Where its unknowns begin. */
	at: number;
	sightings: { mark: number; survey: Vector3; sigma: Vector3 }[];
}

/**
 * Set-ups tied by common targets, adjusted together: a set-up with too little control of its own stands by marks that another one saw
 * (combined adjustment of observation equations, Mikhail & Gracie 1981; Ghilani & Wolf 2017). Unknowns are the pose of each set-up and the place of each mark;
 * observations are all sightings, in their own frames, and all known marks, so nothing is fixed that has an error. Scale is 1.
 * @returns `too-few-pairs` where a set-up is tied by fewer than the least marks, `bad-sigma` for a σ that is not over zero
 */
export function adjustSetups(
	setups: readonly SetupSightings[],
	known: readonly KnownMark[],
	confidence = 0.95,
): { ok: true; adjusted: AdjustedSetups } | { ok: false; refusal: FitRefusal } {
	if ([...setups.flatMap(({ sightings }) => sightings), ...known].some(({ sigma }) => !sigma.every((value) => value > 0))) {
		return {
			ok: false,
			refusal: {
				code: 'bad-sigma',
				message: 'Set-ups adjusted together need standard deviations over zero for every sighting and every known mark.',
			},
		};
	}
	const centre = meanOf(known.map(({ control }) => control));
	const places = new Map<string, number[]>(known.map(({ mark, control }) => [mark, control.map((value, k) => value - centre[k]!)]));
	const started = startSetups(setups, places);
	if (!started.ok) return started;
	const marks = [...places.keys()];
	const place = marks.map((mark) => places.get(mark)!);
	const markOf = new Map(marks.map((mark, i) => [mark, i]));
	let size = 3 * marks.length;
	const standings = started.standings.map(({ sightings, ...rest }): Standing => {
		const at = size;
		size += rest.unknowns.length;
		return { ...rest, at, sightings: sightings.map(({ mark, survey, sigma }) => ({ mark: markOf.get(mark)!, survey, sigma })) };
	});
	const knownAt = known.map(({ mark, control, sigma }) => ({
		mark: markOf.get(mark)!,
		control: control.map((value, k) => value - centre[k]!),
		sigma,
	}));
	if (size === 0) return notTied('There is nothing to adjust.');
	let cofactor: Float64Array = new Float64Array(0);
	let objective = 0;
	for (let round = 0; round < 50; round++) {
		const { normal, gradient, sum } = formSystem(size, place, standings, knownAt);
		objective = sum;
		cofactor = normal;
		if (!invertPositiveDefinite(cofactor, size)) return notTied('The set-ups are not tied to one another and to the control well enough.');
		const step = Array.from({ length: size }, (_, row) =>
			gradient.reduce((total, value, column) => total + normal[row * size + column]! * value, 0),
		);
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
		if (Math.max(...step.map(Math.abs)) < 1e-11) break;
	}
	objective = formSystem(size, place, standings, knownAt).sum;
	const redundancy = 3 * (standings.reduce((sum, { sightings }) => sum + sightings.length, 0) + known.length) - size;
	return { ok: true, adjusted: describe({ standings, place, marks, knownAt, centre, cofactor, objective, redundancy, confidence }) };
}

/** Normal equations of all sightings and known marks at the present places and poses. */
function formSystem(
	size: number,
	place: readonly number[][],
	standings: readonly Standing[],
	known: readonly { mark: number; control: number[]; sigma: Vector3 }[],
): { normal: Float64Array; gradient: Float64Array; sum: number } {
	const normal = new Float64Array(size * size);
	const gradient = new Float64Array(size);
	let sum = 0;
	const add = (terms: readonly [number, number][], misclosure: number, sigma: number): void => {
		const weight = 1 / (sigma * sigma);
		sum += weight * misclosure * misclosure;
		for (const [row, a] of terms) {
			gradient[row]! += weight * a * misclosure;
			for (const [column, b] of terms) normal[row * size + column]! += weight * (a * b);
		}
	};
	for (const { mark, control, sigma } of known)
		for (let k = 0; k < 3; k++) add([[3 * mark + k, 1]], control[k]! - place[mark]![k]!, sigma[k]!);
	for (const { pose, origin, unknowns, at, sightings } of standings) {
		const { rotation: r, shift } = pose;
		for (const { mark, survey, sigma } of sightings) {
			// The sighting in its own frame: x = Rᵀ·(place − shift) + origin. Turning R by ω moves it by −Rᵀ·(ω × d).
			const d = [0, 1, 2].map((k) => place[mark]![k]! - shift[k]!) as [number, number, number];
			for (let axis = 0; axis < 3; axis++) {
				const [rx, ry, rz] = [r[axis]!, r[3 + axis]!, r[6 + axis]!];
				const seen = rx * d[0] + ry * d[1] + rz * d[2];
				const turns = [ry * d[2] - rz * d[1], rz * d[0] - rx * d[2], rx * d[1] - ry * d[0]];
				const byUnknown = [-rx, -ry, -rz, ...turns];
				const terms: [number, number][] = [rx, ry, rz].map((value, k) => [3 * mark + k, value]);
				unknowns.forEach((unknown, i) => {
					terms.push([at + i, byUnknown[unknown]!]);
				});
				add(terms, survey[axis]! - origin[axis]! - seen, sigma[axis]!);
			}
		}
	}
	return { normal, gradient, sum };
}

interface Solved {
	standings: readonly Standing[];
	place: readonly number[][];
	marks: readonly string[];
	knownAt: readonly { mark: number; control: number[]; sigma: Vector3 }[];
	centre: Vector3;
	cofactor: Float64Array;
	objective: number;
	redundancy: number;
	confidence: number;
}

function describe({ standings, place, marks, knownAt, centre, cofactor, objective, redundancy, confidence }: Solved): AdjustedSetups {
	const size = Math.sqrt(cofactor.length);
	const varianceFactor = redundancy > 0 ? objective / redundancy : null;
	const lower = redundancy > 0 ? chiSquareQuantile((1 - confidence) / 2, redundancy) : 0;
	const upper = redundancy > 0 ? chiSquareQuantile((1 + confidence) / 2, redundancy) : 0;
	const chiSquare = redundancy > 0 ? { statistic: objective, lower, upper, passes: objective >= lower && objective <= upper } : null;
	const knownOf = new Map(knownAt.map((entry) => [entry.mark, entry]));
	const fits = standings.map(({ name, fit, pose, origin, unknowns, at, sightings }) => {
		const shift = [0, 1, 2].map((k) => pose.shift[k]! + centre[k]!) as [number, number, number];
		const { rotation: r } = pose;
		const pairs = sightings
			.filter(({ mark }) => knownOf.has(mark))
			.map(({ mark, survey }) => {
				const carried = carryWith(pose, origin, survey);
				const residual = carried.map((value, k) => value - knownOf.get(mark)!.control[k]!) as [number, number, number];
				return {
					name: marks[mark]!,
					residual,
					redundancy: null,
					normalised: null,
					critical: null,
					smallestBlunder: null,
					leaveOneOut: null,
					heldBack: false,
				};
			});
		const square = pairs.reduce((sum, { residual }) => sum + residual.reduce((total, value) => total + value * value, 0), 0);
		const result: FitResult = {
			fit,
			scale: 1,
			rotation: toMatrix3(r) as FitResult['rotation'],
			translation: [0, 1, 2].map((k) => shift[k]! - (r[3 * k]! * origin[0] + r[3 * k + 1]! * origin[1] + r[3 * k + 2]! * origin[2])) as [
				number,
				number,
				number,
			],
			origin: [...origin],
			shift,
			sigmaGiven: true,
			scalesHeights: fit === 'free',
			parameterCovariance: unknowns.map((_, i) => unknowns.map((__, j) => cofactor[(at + i) * size + at + j]!)),
			rms: Math.sqrt(square / Math.max(pairs.length, 1)),
			redundancy,
			varianceFactor,
			chiSquare,
			pairs,
			carried: [],
			findings: [],
		};
		return { setup: name, fit: result };
	});
	const adjustedMarks = marks.map((mark, i) => ({
		mark,
		place: [0, 1, 2].map((k) => place[i]![k]! + centre[k]!) as unknown as Vector3,
		sigma: [0, 1, 2].map((k) => Math.sqrt(cofactor[(3 * i + k) * (size + 1)]!)) as unknown as Vector3,
	}));
	return { fits, marks: adjustedMarks, redundancy, varianceFactor, chiSquare };
}

function meanOf(points: readonly Vector3[]): Vector3 {
	const first = points[0] ?? [0, 0, 0];
	return [0, 1, 2].map(
		(k) => first[k]! + points.reduce((sum, point) => sum + (point[k]! - first[k]!), 0) / Math.max(points.length, 1),
	) as unknown as Vector3;
}
