import type { Vector3 } from '../../geometry/frame.ts';
import { groupSpanM, type MarkedEntry, markGroups } from './bolt-distance.ts';
import type { DerivedFigure, DerivedTerm, MeasuredCheckpoint } from './linear-uncertainty.ts';

/** A group of marks about its own middle, design frame, metres. */
interface Group {
	readonly entries: readonly MarkedEntry[];
	/** From the middle of the design places. */
	readonly arms: readonly (readonly [number, number])[];
	readonly farthestM: number;
	readonly squaresM2: number;
}

/** Groups that lie within 1.5 m; a wider one is no bolt group. */
function groupsOf(marked: readonly MarkedEntry[]): Group[] {
	return markGroups(marked).flatMap((entries): Group[] => {
		const middle = [0, 1].map((axis) => entries.reduce((sum, { checkpoint }) => sum + checkpoint.place[axis]!, 0) / entries.length);
		const arms = entries.map(({ checkpoint: { place } }) => [place[0] - middle[0]!, place[1] - middle[1]!] as const);
		const lengths = arms.map(([x, y]) => Math.hypot(x, y));
		const farthestM = Math.max(...lengths);
		return 2 * farthestM > groupSpanM ? [] : [{ entries, arms, farthestM, squaresM2: lengths.reduce((sum, each) => sum + each ** 2, 0) }];
	});
}

const nameOf = (entries: readonly MarkedEntry[]): string => entries[0]!.elementMark.replace(/[-_ ][^-_ ]*$/, '');

function figureOf(entries: readonly MarkedEntry[], label: string, weights: readonly Vector3[]): DerivedFigure {
	const terms = entries.map((entry, k): DerivedTerm => ({ entry, weight: weights[k]! }));
	const deviationMm = terms.reduce(
		(sum, { entry, weight }) => sum + weight[0] * entry.measured.offsetMm![0] + weight[1] * entry.measured.offsetMm![1],
		0,
	);
	return { elementId: entries[0]!.checkpoint.elementId, label, deviationMm, terms, from: entries.map(({ checkpoint }) => checkpoint.id) };
}

/** How far a group as a whole stands off: the mean of its marks' offsets, east and north. Fit and common part stay in it whole. */
export function groupShiftFigures(marked: readonly MarkedEntry[]): DerivedFigure[] {
	return groupsOf(marked).flatMap(({ entries }) =>
		(['east', 'north'] as const).map((way, axis) => {
			const share = 1 / entries.length;
			const weight: Vector3 = axis === 0 ? [share, 0, 0] : [0, share, 0];
			return figureOf(
				entries,
				`${nameOf(entries)}, ${entries.length} marks, shift ${way}`,
				entries.map(() => weight),
			);
		}),
	);
}

/**
 * How far a group as a whole is turned, + anticlockwise, told as what it moves its farthest mark: the least-squares turn of the marks about
 * their middle, Σ arm × offset / Σ arm², times the longest arm. No shift of the whole, of fit or common part, changes it.
 */
export function groupTurnFigures(marked: readonly MarkedEntry[]): DerivedFigure[] {
	return groupsOf(marked).flatMap(({ entries, arms, farthestM, squaresM2 }) => {
		if (squaresM2 < 1e-6) return [];
		const weights = arms.map(([x, y]): Vector3 => [(-y * farthestM) / squaresM2, (x * farthestM) / squaresM2, 0]);
		return [figureOf(entries, `${nameOf(entries)}, ${entries.length} marks, turn at ${(farthestM * 1000).toFixed(0)} mm`, weights)];
	});
}

/** So far beside and below a bolt's top its concrete is looked for, metres. */
const besideM = 1.5;
const belowM = 1;

/**
 * How far bolts stand out of what they are cast into: the deviation of the bolt's top less that of the nearest measured level below it,
 * + stands out too far. The height of the instrument, of fit and common part, cancels.
 */
export function projectionFigures(bolts: readonly MarkedEntry[], others: readonly MeasuredCheckpoint[]): DerivedFigure[] {
	const isTop = ({ checkpoint }: MeasuredCheckpoint): boolean => checkpoint.characteristic === 'level' && !checkpoint.isSoffit;
	const surfaces = others.filter(isTop);
	return bolts.filter(isTop).flatMap((bolt) => {
		const [x, y, z] = bolt.checkpoint.place;
		const near = surfaces
			.map((surface) => ({ surface, farM: Math.hypot(surface.checkpoint.place[0] - x, surface.checkpoint.place[1] - y) }))
			.filter(({ surface, farM }) => farM <= besideM && surface.checkpoint.place[2] < z && surface.checkpoint.place[2] > z - belowM)
			.sort((a, b) => a.farM - b.farM)[0]?.surface;
		if (near === undefined) return [];
		const designMm = (z - near.checkpoint.place[2]) * 1000;
		return [
			{
				elementId: bolt.checkpoint.elementId,
				label: `${bolt.elementMark}, projection of ${designMm.toFixed(0)} mm over ${near.checkpoint.mark}`,
				deviationMm: bolt.measured.deviationMm - near.measured.deviationMm,
				terms: [
					{ entry: bolt, weight: [0, 0, 1] },
					{ entry: near, weight: [0, 0, -1] },
				],
				from: [bolt.checkpoint.id, near.checkpoint.id],
			},
		];
	});
}
