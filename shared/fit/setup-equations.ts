import type { Vector3 } from '#shared/geometry/frame.ts';
import type { MarkSighting, StartedSetup } from './start-setups.ts';

/** The observation equations of set-ups adjusted together: unknowns are the places of the marks, three each, then the poses. */

/** A started set-up with its place among the unknowns. */
export interface Standing extends Omit<StartedSetup, 'sightings'> {
	/** Where its unknowns begin. */
	at: number;
	/** `mark` numbers the marks. */
	sightings: (Omit<MarkSighting, 'mark'> & { mark: number })[];
}

/** A mark known beforehand, metres less the centre; null along an axis that is not known. */
export interface KnownAt {
	mark: number;
	control: readonly (number | null)[];
	sigma: Vector3;
}

/** One observed number: misclosure ≈ Σ a·(change of the unknown). */
export interface ObservationRow {
	terms: readonly (readonly [unknown: number, a: number])[];
	/** Observed less computed, metres. */
	misclosure: number;
	sigma: number;
}

const axesOf = { all: [0, 1, 2], plan: [0, 1], level: [2] } as const;

/** The rows of a known mark: its coordinates as given, those that are. */
export function knownRows({ mark, control, sigma }: KnownAt, place: readonly number[]): ObservationRow[] {
	return control.flatMap((value, k) =>
		value === null ? [] : [{ terms: [[3 * mark + k, 1]] as const, misclosure: value - place[k]!, sigma: sigma[k]! }],
	);
}

/**
 * The rows of a sighting, along the axes of the survey frame: x = Rᵀ·(place − shift) + origin, and turning R by ω moves it by −Rᵀ·(ω × d).
 * A levelled set-up's rows of plan and level are apart, so that either may be left away.
 */
export function sightingRows(
	{ pose, origin, unknowns, at }: Standing,
	{ mark, survey, sigma, use = 'all' }: Standing['sightings'][number],
	place: readonly number[],
): ObservationRow[] {
	const { rotation: r, shift } = pose;
	const d = [0, 1, 2].map((k) => place[k]! - shift[k]!) as [number, number, number];
	return axesOf[use].map((axis) => {
		const [rx, ry, rz] = [r[axis]!, r[3 + axis]!, r[6 + axis]!];
		const seen = rx * d[0] + ry * d[1] + rz * d[2];
		const byUnknown = [-rx, -ry, -rz, ry * d[2] - rz * d[1], rz * d[0] - rx * d[2], rx * d[1] - ry * d[0]];
		const terms = [rx, ry, rz].map((value, k) => [3 * mark + k, value] as const);
		unknowns.forEach((unknown, i) => {
			terms.push([at + i, byUnknown[unknown]!]);
		});
		return { terms, misclosure: survey[axis]! - origin[axis]! - seen, sigma: sigma[axis]! };
	});
}

/** @param open places of marks along axes that nothing observes: they are left where they are and count as no unknown */
export interface SetupSystem {
	normal: Float64Array;
	gradient: Float64Array;
	sum: number;
	rowCount: number;
	open: number;
}

/** Normal equations of all rows. */
export function formSetupSystem(
	size: number,
	place: readonly (readonly number[])[],
	standings: readonly Standing[],
	known: readonly KnownAt[],
): SetupSystem {
	const normal = new Float64Array(size * size);
	const gradient = new Float64Array(size);
	let sum = 0;
	let rowCount = 0;
	const add = ({ terms, misclosure, sigma }: ObservationRow): void => {
		const weight = 1 / (sigma * sigma);
		sum += weight * misclosure * misclosure;
		rowCount++;
		for (const [row, a] of terms) {
			gradient[row]! += weight * a * misclosure;
			for (const [column, b] of terms) normal[row * size + column]! += weight * (a * b);
		}
	};
	for (const one of known) knownRows(one, place[one.mark]!).forEach(add);
	for (const standing of standings)
		for (const sighting of standing.sightings)
			if (!sighting.isHeldBack) sightingRows(standing, sighting, place[sighting.mark]!).forEach(add);
	let open = 0;
	for (let i = 0; i < size; i++) {
		if (normal[i * size + i] !== 0) continue;
		normal[i * size + i] = 1;
		open++;
	}
	return { normal, gradient, sum, rowCount, open };
}

/** aᵀ·Q·a of a row. */
export function rowCofactor(terms: ObservationRow['terms'], cofactor: Float64Array, size: number): number {
	let sum = 0;
	for (const [row, a] of terms) for (const [column, b] of terms) sum += a * cofactor[row * size + column]! * b;
	return sum;
}
