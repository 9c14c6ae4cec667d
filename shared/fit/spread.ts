import { jacobiColumns } from '#shared/geometry/singular-values.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import type { FitRefusal } from './fit-schema.ts';
import { isLevelled, leastPairs } from './least-pairs.ts';

/** Spreads under this do not determine a direction, metres. */
export const LEAST_SPREAD = 1e-6;

/**
 * Root mean square extents along the principal axes, largest first, and the axes.
 * @param axes nine numbers, row by row, the principal axes as columns
 */
export interface Spread {
	extents: readonly [number, number, number];
	axes: Float64Array;
}

/**
 * Principal extents of reduced points.
 * @param points 3·count numbers, metres
 * @param count how many points; 0 gives extents of 0
 * @param planOnly leave the third coordinate out
 */
export function spreadOf(points: Float64Array, count: number, planOnly = false): Spread {
	const columns = points.slice(0, 3 * count);
	const axes = new Float64Array(9);
	const singular = new Float64Array(3);
	for (let k = 0; k < 3; k++) {
		let mean = 0;
		for (let at = k; at < 3 * count; at += 3) mean += columns[at]! / count;
		for (let at = k; at < 3 * count; at += 3) columns[at] = planOnly && k === 2 ? 0 : columns[at]! - mean;
	}
	jacobiColumns(columns, count, axes, singular);
	const share = 1 / Math.sqrt(Math.max(count, 1));
	return { extents: [singular[0]! * share, singular[1]! * share, singular[2]! * share], axes };
}

/** Why these pairs do not determine the fit, or null where they do. */
export function refuseGeometry(observations: FitObservations): FitRefusal | null {
	const { kind, count, known } = observations;
	const least = leastPairs(kind);
	const withPlan = indicesKnowing(known, KNOWN_PLAN);
	const withHeight = indicesKnowing(known, KNOWN_HEIGHT);
	if (kind === 'height') {
		return withHeight.length >= 1 ? null : few('A height fit needs at least 1 pair with a known level in the fit; there is none.');
	}
	const usable = isLevelled(kind) ? withPlan.length : count;
	if (usable < least) {
		const what = isLevelled(kind)
			? 'a levelled fit needs at least 2 pairs with a known plan position'
			: 'a free fit needs at least 3 pairs';
		return few(`There are ${usable} in the fit; ${what}.`);
	}
	if (isLevelled(kind)) {
		if (withHeight.length < 1) return few('No pair in the fit has a known level, so the height shift stays open.');
		const all = [observations.survey, observations.control].map((points) => spreadOf(points, count));
		if (all.some(({ extents }) => !(extents[0] >= LEAST_SPREAD))) return noSpread();
		for (const points of [observations.survey, observations.control]) {
			const plan = spreadOf(pickTriples(points, withPlan), withPlan.length, true);
			if (!(plan.extents[0] >= LEAST_SPREAD)) {
				return {
					code: 'on-a-line',
					message: 'All targets stand over one spot in plan, so the bearing stays open. Add a target well apart from them.',
				};
			}
		}
		return null;
	}
	const spreads = [observations.survey, observations.control].map((points) => spreadOf(points, count));
	if (spreads.some(({ extents }) => !(extents[0] >= LEAST_SPREAD))) return noSpread();
	if (spreads.some(({ extents }) => !(extents[1] >= LEAST_SPREAD))) {
		return { code: 'on-a-line', message: 'All targets lie on one line, so the turn about that line stays open. Add a target well off it.' };
	}
	return null;
}

function few(message: string): FitRefusal {
	return { code: 'too-few-pairs', message };
}

function noSpread(): FitRefusal {
	return { code: 'no-spread', message: 'All targets are in one place, so no direction can be found from them.' };
}

/** The pairs that know this coordinate. */
export function indicesKnowing(known: Uint8Array, which: number): number[] {
	const indices: number[] = [];
	known.forEach((value, i) => {
		if ((value & which) !== 0) indices.push(i);
	});
	return indices;
}

function pickTriples(points: Float64Array, indices: readonly number[]): Float64Array {
	const picked = new Float64Array(3 * indices.length);
	indices.forEach((from, to) => {
		picked.set(points.subarray(3 * from, 3 * from + 3), 3 * to);
	});
	return picked;
}
