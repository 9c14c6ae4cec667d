import type { Vector3 } from '#shared/geometry/frame.ts';
import { observationsOf } from './fit-observations.ts';
import { poseMatrix } from './fit-pose.ts';
import type { FitInput } from './fit-schema.ts';
import { distanceTable, nearestWithin, pairsByLength, pairsOfLength } from './mutual-distances.ts';
import { fitRigid, newRigidFit } from './rigid-fit.ts';
import { quickFit } from './solve-fit.ts';

export interface UnnamedPoint {
	name: string;
	point: Vector3;
}

export interface UnnamedMatchInput {
	fit: 'levelled' | 'free';
	/** What the instrument saw, survey frame, metres; some may be no control point at all. */
	targets: readonly UnnamedPoint[];
	/** What is known, control frame, metres; some may not have been seen. */
	control: readonly UnnamedPoint[];
	/** How far a target may lie from its control point, metres. */
	toleranceM: number;
	/** A match of fewer targets is taken for chance; by default 4 for a free set-up, 3 for a levelled one. */
	leastMatched?: number;
}

export interface UnnamedMatch {
	pairs: { target: string; control: string; misfitM: number }[];
	/** Targets that are none of the control points. */
	strangers: string[];
	rmsM: number;
}

/**
 * @param matches all assignments that match the most targets, the smallest misfit first: one is a match, several are equally good and none may be picked
 * @param hypothesesFitted how many positions were fitted on the way
 */
export interface UnnamedMatches {
	matches: UnnamedMatch[];
	hypothesesFitted: number;
}

/**
 * Matches targets to control points by mutual distances alone, which no move of the instrument changes.
 *
 * Exhaustive where it matters: a match of m out of n targets has at least one pair of targets among any n − m + 2 of them, so once m is
 * reached only the pairs among so few need be looked at to find every match that is as good. A pair of targets proposes the control pairs
 * of its length; how many further targets agree by their distances to both bounds what the proposal can match, and only the promising are fitted.
 * No more than a thousand targets or ten thousand control points; the work is bounded by pairs tried × control pairs of a length × targets.
 */
export function matchUnnamed(input: UnnamedMatchInput): UnnamedMatches {
	const { targets, control, toleranceM } = input;
	const least = input.leastMatched ?? (input.fit === 'free' ? 4 : 3);
	const count = targets.length;
	const targetTable = distanceTable(targets);
	const controlTable = distanceTable(control);
	// Two ends, each off by up to the tolerance.
	const slack = 2 * toleranceM;
	const lengths = pairsByLength(controlTable, control.length, slack);
	const order = byReach(targetTable, count);
	let best = least;
	let hypothesesFitted = 0;
	const found = new Map<string, UnnamedMatch>();
	const tried = new Set<string>();
	for (let later = 1; later < count && later < count - best + 2; later++) {
		for (let earlier = 0; earlier < later; earlier++) {
			const a = order[earlier]!;
			const b = order[later]!;
			const length = targetTable[a * count + b]!;
			if (length < 4 * slack) continue;
			for (const code of pairsOfLength(lengths, controlTable, length, slack)) {
				const i = Math.floor(code / control.length);
				const j = code % control.length;
				for (let way = 0; way < 2; way++) {
					const p = way === 0 ? i : j;
					const q = way === 0 ? j : i;
					const seeds = agreeing(input, targetTable, controlTable, a, b, p, q, slack, best);
					if (!seeds) continue;
					const key = seeds.map(([t, c]) => `${t}:${c}`).join(' ');
					if (tried.has(key)) continue;
					tried.add(key);
					hypothesesFitted++;
					const match = workOut(input, seeds);
					if (!match || match.pairs.length < best) continue;
					if (match.pairs.length > best) found.clear();
					best = match.pairs.length;
					found.set(match.pairs.map(({ target, control: to }) => JSON.stringify([target, to])).join(), match);
				}
			}
		}
	}
	return { matches: [...found.values()].sort((x, y) => x.rmsM - y.rmsM), hypothesesFitted };
}

/** Targets by how far they reach, furthest apart first: long sides tell the turn best. */
function byReach(table: Float64Array, count: number): number[] {
	const reach = Array.from({ length: count }, (_, i) => table.subarray(i * count, (i + 1) * count).reduce((sum, value) => sum + value, 0));
	return reach.map((_, i) => i).sort((a, b) => reach[b]! - reach[a]!);
}

/** Targets that agree with a→p, b→q by their distances to both, each with its control point; null where fewer than `best` could be matched. */
function agreeing(
	{ fit, targets, control }: UnnamedMatchInput,
	targetTable: Float64Array,
	controlTable: Float64Array,
	a: number,
	b: number,
	p: number,
	q: number,
	slack: number,
	best: number,
): [number, number][] | null {
	const count = targets.length;
	const size = control.length;
	const isFree = fit === 'free';
	if (!isFree && !isLevel(targets, control, b, a, q, p, slack)) return null;
	const seeds: [number, number][] = [
		[a, p],
		[b, q],
	];
	const rowP = p * size;
	const rowQ = q * size;
	for (let t = 0; t < count; t++) {
		if (seeds.length + count - t < best) return null;
		if (t === a || t === b) continue;
		const toA = targetTable[a * count + t]!;
		const toB = targetTable[b * count + t]!;
		const least = toA - slack;
		const most = toA + slack;
		for (let c = 0; c < size; c++) {
			const toP = controlTable[rowP + c]!;
			if (toP > most || toP < least || Math.abs(controlTable[rowQ + c]! - toB) > slack) continue;
			if (c === p || c === q || !(isFree || isLevel(targets, control, t, a, c, p, slack))) continue;
			if (!consistent(seeds, targetTable, controlTable, count, size, t, c, slack)) continue;
			seeds.push([t, c]);
			break;
		}
	}
	return seeds.length >= Math.min(best, 3) ? seeds : null;
}

/** Whether the height from one target to the other is that from one control point to the other. */
function isLevel(
	targets: readonly UnnamedPoint[],
	control: readonly UnnamedPoint[],
	t: number,
	from: number,
	c: number,
	to: number,
	slack: number,
): boolean {
	return Math.abs(targets[t]!.point[2] - targets[from]!.point[2] - control[c]!.point[2] + control[to]!.point[2]) <= slack;
}

/** The first three that agree fix the rest: a further one must keep its distance to the third as well. */
function consistent(
	seeds: readonly [number, number][],
	targetTable: Float64Array,
	controlTable: Float64Array,
	count: number,
	size: number,
	t: number,
	c: number,
	slack: number,
): boolean {
	return seeds.every(
		([other, to], k) => k < 2 || (to !== c && Math.abs(targetTable[other * count + t]! - controlTable[to * size + c]!) <= slack),
	);
}

/** Takes survey coordinates to where a fit puts them. */
type Placing = (point: Vector3) => Vector3;

/** The fit of these targets to these control points, all equally good; null where they do not determine it. */
function placingOf({ fit, targets, control }: UnnamedMatchInput, assigned: readonly (readonly [number, number])[]): Placing | null {
	if (fit === 'levelled') return levelledPlacing(targets, control, assigned);
	const survey = new Float64Array(3 * assigned.length);
	const known = new Float64Array(3 * assigned.length);
	for (let i = 0; i < assigned.length; i++) {
		const from = targets[assigned[i]![0]]!.point;
		const to = control[assigned[i]![1]]!.point;
		for (let k = 0; k < 3; k++) {
			survey[3 * i + k] = from[k]!;
			known[3 * i + k] = to[k]!;
		}
	}
	const rigid = newRigidFit();
	if (!fitRigid(survey, known, 0, assigned.length, rigid)) return null;
	return placing(rigid.rotation, rigid.surveyMean, rigid.controlMean);
}

function levelledPlacing(
	targets: readonly UnnamedPoint[],
	control: readonly UnnamedPoint[],
	assigned: readonly (readonly [number, number])[],
): Placing | null {
	const pairs: FitInput['pairs'] = assigned.map(([t, c], i) => ({
		name: String(i),
		survey: [...targets[t]!.point],
		control: [...control[c]!.point],
	}));
	const observations = observationsOf({ fit: 'levelled', pairs }, pairs);
	const fit = quickFit(observations);
	if (!fit) return null;
	const matrix = new Float64Array(9);
	poseMatrix(fit.pose, matrix);
	const shift = observations.controlOrigin.map((value, k) => value + fit.pose.shift[k]!);
	return placing(matrix, observations.surveyOrigin, shift);
}

function placing(matrix: Float64Array, from: ArrayLike<number>, to: ArrayLike<number>): Placing {
	return (point) => {
		const x = point[0] - from[0]!;
		const y = point[1] - from[1]!;
		const z = point[2] - from[2]!;
		return [
			matrix[0]! * x + matrix[1]! * y + matrix[2]! * z + to[0]!,
			matrix[3]! * x + matrix[4]! * y + matrix[5]! * z + to[1]!,
			matrix[6]! * x + matrix[7]! * y + matrix[8]! * z + to[2]!,
		];
	};
}

/** Fits the proposal, matches all targets to the nearest control points, and fits again until the match stays the same. */
function workOut(input: UnnamedMatchInput, seeds: readonly [number, number][]): UnnamedMatch | null {
	const { targets, control, toleranceM } = input;
	let assigned: readonly (readonly [number, number])[] = seeds;
	for (let round = 0; round < 6; round++) {
		const place = placingOf(input, assigned);
		if (!place) return null;
		// The first round is off by what a small proposal extrapolates.
		const reach = round === 0 ? 3 * toleranceM : toleranceM;
		const next = nearestWithin(
			targets.map(({ point }) => place(point)),
			control,
			reach,
		);
		const settled =
			round > 0 && next.length === assigned.length && next.every(([t, c], k) => assigned[k]![0] === t && assigned[k]![1] === c);
		if (settled || round === 5) {
			const matched = new Set(next.map(([t]) => t));
			const square = next.reduce((sum, [, , misfit]) => sum + misfit * misfit, 0);
			return {
				pairs: next.map(([t, c, misfit]) => ({ target: targets[t]!.name, control: control[c]!.name, misfitM: misfit })),
				strangers: targets.filter((_, t) => !matched.has(t)).map(({ name }) => name),
				rmsM: Math.sqrt(square / Math.max(next.length, 1)),
			};
		}
		assigned = next.map(([t, c]) => [t, c]);
	}
	return null;
}
