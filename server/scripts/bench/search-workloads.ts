import { largestAgreement, largestAgreementOf } from '#shared/fit/largest-agreement.ts';
import { matchUnnamed, type UnnamedMatches, type UnnamedPoint } from '#shared/fit/match-unnamed.ts';
import { triadPose } from '#shared/fit/triad.ts';
import { pairsWithBlunders, seededTargets, seededTriples } from './seeded-input.ts';
import type { Prepare, Program, Workload } from './workload.ts';
import { countWithin } from './yardsticks.ts';

/** Searches: targets without names, and the largest group of pairs that agree. */

const MATCH_TOLERANCE_M = 0.02;
const BLUNDER_TOLERANCE_M = 0.015;
const DRAWS = 2000;

function matchOnce(targets: readonly UnnamedPoint[], control: readonly UnnamedPoint[]): UnnamedMatches {
	return matchUnnamed({ fit: 'free', targets, control, toleranceM: MATCH_TOLERANCE_M });
}

/** How many targets the only match has right; not a number where there is a rival, a wrong pair, or a stranger taken for a mark. */
function rightlyMatched({ matches }: UnnamedMatches, truth: readonly number[]): number {
	const [match] = matches;
	if (matches.length !== 1 || !match) return Number.NaN;
	const isRight = match.pairs.every(({ target, control }) => `C${truth[Number(target.slice(1))]}` === control);
	return isRight && match.pairs.length + match.strangers.length === truth.length ? match.pairs.length : Number.NaN;
}

function matching(targetCount: number, controlCount: number): Program {
	const { targets, control, truth } = seededTargets(targetCount, controlCount);
	return (units) => {
		let found = matchOnce(targets, control);
		for (let unit = 1; unit < units; unit++) found = matchOnce(targets, control);
		return {
			n: units,
			check: () => rightlyMatched(found, truth),
			also: () => ({ hypotheses: found.hypothesesFitted, ...largerMatches() }),
		};
	};
}

/** Seconds and hypotheses of larger matches, each once warm. */
function largerMatches(): Record<string, number> {
	const figures: Record<string, number> = {};
	for (const [targetCount, controlCount] of [
		[24, 80],
		[60, 500],
	] as const) {
		const { targets, control, truth } = seededTargets(targetCount, controlCount);
		matchOnce(targets, control);
		const start = performance.now();
		const found = matchOnce(targets, control);
		const size = `${targetCount}-${controlCount}`;
		figures[`seconds-${size}`] = (performance.now() - start) / 1000;
		figures[`hypotheses-${size}`] = found.hypothesesFitted;
		figures[`matched-${size}`] = rightlyMatched(found, truth);
	}
	return figures;
}

/** All ordered triples of control for the first three targets, each fitted, and the targets counted that have a control point near. */
function tryingAll(targetCount: number, controlCount: number): Program {
	const { targets, control } = seededTargets(targetCount, controlCount);
	const seen = Float64Array.from(targets.flatMap(({ point }) => point));
	const known = Float64Array.from(control.flatMap(({ point }) => point));
	return (units) => {
		let best = 0;
		// triadPose takes pair i of both sides: the three control points tried are put beside the three targets.
		const three = new Float64Array(9);
		const pose = new Float64Array(12);
		for (let unit = 0; unit < units; unit++) {
			for (let i = 0; i < controlCount; i++) {
				for (let j = 0; j < controlCount; j++) {
					for (let k = 0; k < controlCount; k++) {
						if (i === j || j === k || i === k) continue;
						for (let axis = 0; axis < 3; axis++) {
							three[axis] = known[3 * i + axis]!;
							three[3 + axis] = known[3 * j + axis]!;
							three[6 + axis] = known[3 * k + axis]!;
						}
						if (triadPose(seen, three, 0, 1, 2, pose)) best = Math.max(best, countNear(seen, known, pose));
					}
				}
			}
		}
		return { n: units, check: () => best };
	};
}

function countNear(seen: Float64Array, known: Float64Array, pose: Float64Array): number {
	const square = MATCH_TOLERANCE_M * MATCH_TOLERANCE_M;
	let near = 0;
	for (let at = 0; at < seen.length; at += 3) {
		const x = seen[at]!;
		const y = seen[at + 1]!;
		const z = seen[at + 2]!;
		const e = pose[0]! * x + pose[1]! * y + pose[2]! * z + pose[9]!;
		const n = pose[3]! * x + pose[4]! * y + pose[5]! * z + pose[10]!;
		const h = pose[6]! * x + pose[7]! * y + pose[8]! * z + pose[11]!;
		for (let to = 0; to < known.length; to += 3) {
			const de = known[to]! - e;
			const dn = known[to + 1]! - n;
			const dh = known[to + 2]! - h;
			if (de * de + dn * dn + dh * dh > square) continue;
			near++;
			break;
		}
	}
	return near;
}

/** Triples by index: every one of 40 pairs, or those drawn by chance. */
function triplesOf(count: number, isDrawn: boolean): Int32Array {
	if (isDrawn) return seededTriples(77, DRAWS, count);
	const triples: number[] = [];
	for (let i = 0; i < count; i++) for (let j = i + 1; j < count; j++) for (let k = j + 1; k < count; k++) triples.push(i, j, k);
	return Int32Array.from(triples);
}

function searching(count: number, isDrawn: boolean): Prepare {
	return (times) => {
		const { survey, control } = pairsWithBlunders(7000, count * times);
		const triples = triplesOf(isDrawn ? count * times : 3, isDrawn);
		return (units) => {
			let size = 0;
			for (let unit = 0; unit < units; unit++) {
				size = isDrawn
					? largestAgreementOf(survey, control, count * times, BLUNDER_TOLERANCE_M, triples).size
					: largestAgreement(survey, control, count * times, BLUNDER_TOLERANCE_M).size;
			}
			return { n: units, check: () => size };
		};
	};
}

function countingAll(count: number, isDrawn: boolean): Prepare {
	return (times) => {
		const { survey, control } = pairsWithBlunders(7000, count * times);
		const triples = triplesOf(count * times, isDrawn);
		return (units) => {
			const pose = new Float64Array(12);
			let size = 0;
			for (let unit = 0; unit < units; unit++) {
				for (let at = 0; at < triples.length; at += 3) {
					if (!triadPose(survey, control, triples[at]!, triples[at + 1]!, triples[at + 2]!, pose)) continue;
					size = Math.max(size, countWithin(survey, control, count * times, pose, BLUNDER_TOLERANCE_M));
				}
			}
			return { n: units, check: () => size };
		};
	};
}

export const searchWorkloads: readonly Workload[] = [
	{
		name: 'match-12-40',
		unit: 'matches',
		units: { product: 2000, yardstick: 4 },
		goal: 1 / 220,
		// Target pairs tried × control pairs of that length × control: 3 × 3 × 3 at the most.
		growth: 27,
		expected: { value: 9, within: 0 },
		product: (times) => matching(12 * times, 40 * times),
		yardstick: (times) => tryingAll(12 * times, 40 * times),
	},
	{
		name: 'blunder-40',
		unit: 'searches of 9 880 subsets',
		units: { product: 1000, yardstick: 100 },
		goal: 0.33,
		// C(n, 3)·n.
		growth: 81,
		expected: { value: 32, within: 0 },
		product: searching(40, false),
		yardstick: countingAll(40, false),
	},
	{
		name: 'blunder-200',
		unit: 'searches of 2 000 draws',
		units: { product: 1000, yardstick: 200 },
		goal: 0.27,
		growth: 3,
		expected: { value: 160, within: 0 },
		product: searching(200, true),
		yardstick: countingAll(200, true),
	},
];
