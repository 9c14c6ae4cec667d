import type { Vector3 } from '../../geometry/frame.ts';
import { pointNameKey } from '../../survey/point-name.ts';
import type { DerivedFigure, MeasuredCheckpoint } from './linear-uncertainty.ts';

/** Bolts further apart belong to no one group, metres; more than so many are no bolt group. */
export const groupSpanM = 1.5;
const mostInGroup = 24;

/** "BC2-G-3" → the key of "BC2-G": marks of a group differ in their last part. */
function groupKey(mark: string): string | null {
	const key = pointNameKey(mark);
	const cut = key.lastIndexOf('-');
	return cut > 0 ? key.slice(0, cut) : null;
}

/** A measured checkpoint with its element's mark. */
export type MarkedEntry = MeasuredCheckpoint & { readonly elementMark: string };

/** Marks in plan that differ in their last part alone, two at least and at most 24. */
export function markGroups(entries: readonly MarkedEntry[]): MarkedEntry[][] {
	const groups = new Map<string, MarkedEntry[]>();
	for (const entry of entries) {
		if (entry.measured.offsetMm === null) continue;
		const key = groupKey(entry.elementMark) ?? groupKey(entry.checkpoint.mark);
		if (key !== null) groups.set(key, [...(groups.get(key) ?? []), entry]);
	}
	return [...groups.values()].filter((group) => group.length >= 2 && group.length <= mostInGroup);
}

/**
 * Distances within groups of marks in plan, as built less design, + is too far apart. A group is marks that differ in their last part alone and lie within
 * 1.5 m. What shifts or turns the whole group, fit and common part among them, changes no distance.
 */
export function boltDistanceFigures(entries: readonly MarkedEntry[]): DerivedFigure[] {
	const figures: DerivedFigure[] = [];
	for (const group of markGroups(entries)) {
		for (let i = 1; i < group.length; i++) {
			for (let j = 0; j < i; j++) {
				const [p, q] = [group[j]!, group[i]!];
				const design = [q.checkpoint.place[0] - p.checkpoint.place[0], q.checkpoint.place[1] - p.checkpoint.place[1]] as const;
				const designM = Math.hypot(...design);
				if (designM < 0.01 || designM > groupSpanM) continue;
				const built = [0, 1].map((axis) => design[axis]! + (q.measured.offsetMm![axis]! - p.measured.offsetMm![axis]!) / 1000) as [
					number,
					number,
				];
				const builtM = Math.hypot(...built);
				if (builtM === 0) continue;
				const along: Vector3 = [built[0] / builtM, built[1] / builtM, 0];
				figures.push({
					elementId: p.checkpoint.elementId,
					label: `${p.elementMark} to ${q.elementMark}, ${(designM * 1000).toFixed(0)} mm`,
					deviationMm: (builtM - designM) * 1000,
					terms: [
						{ entry: q, weight: along },
						{ entry: p, weight: [0 - along[0], 0 - along[1], 0] },
					],
					from: [p.checkpoint.id, q.checkpoint.id],
				});
			}
		}
	}
	return figures;
}
