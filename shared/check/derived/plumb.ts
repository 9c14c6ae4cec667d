import type { Vector3 } from '../../geometry/frame.ts';
import type { DerivedFigure, DerivedTerm, MeasuredCheckpoint } from './linear-uncertainty.ts';
import { scaled } from './linear-uncertainty.ts';

/** How far an element stands over along an axis at one end: the mean over its sides of the mean of each side's faces and marks. */
function shiftAt(
	entries: readonly MeasuredCheckpoint[],
	axis: Vector3,
): { mm: number; terms: DerivedTerm[]; heightM: number; sides: string } | null {
	const sides = new Map<string, { entry: MeasuredCheckpoint; mm: number }[]>();
	for (const entry of entries) {
		const { checkpoint, measured } = entry;
		let side: string;
		let mm: number;
		if (measured.offsetMm !== null) {
			side = 'mark';
			mm = measured.offsetMm[0] * axis[0] + measured.offsetMm[1] * axis[1];
		} else {
			const along = checkpoint.direction === null ? 0 : checkpoint.direction[0] * axis[0] + checkpoint.direction[1] * axis[1];
			if (Math.abs(along) < 0.999) continue;
			side = along > 0 ? '+' : '−';
			mm = Math.sign(along) * measured.deviationMm;
		}
		sides.set(side, [...(sides.get(side) ?? []), { entry, mm }]);
	}
	if (sides.size === 0) return null;
	const terms: DerivedTerm[] = [];
	let mm = 0;
	let heightM = 0;
	for (const list of sides.values()) {
		for (const item of list) {
			const share = 1 / (sides.size * list.length);
			mm += share * item.mm;
			heightM += share * item.entry.checkpoint.place[2];
			terms.push({ entry: item.entry, weight: scaled(axis, share) });
		}
	}
	return { mm, terms, heightM, sides: [...sides.keys()].sort().join() };
}

function axisWords([e, n]: Vector3): string {
	if (Math.abs(e) > 0.999) return 'east';
	if (Math.abs(n) > 0.999) return 'north';
	return `${(((Math.atan2(e, n) * 180) / Math.PI + 360) % 360).toFixed(0)}° from north`;
}

/**
 * Out of plumb along each of an upright element's two plan axes (those of its faces; east and north for marks alone): where its top third stands over
 * where its bottom third does, + along the axis. Only the height that was measured counts: nothing is drawn on to the full height.
 */
export function plumbFigures(elementId: string, entries: readonly MeasuredCheckpoint[]): DerivedFigure[] {
	const upright = entries.filter(
		({ checkpoint, measured }) =>
			measured.offsetMm !== null ||
			(checkpoint.characteristic === 'face' && checkpoint.direction !== null && Math.abs(checkpoint.direction[2]) < 0.05),
	);
	if (upright.length < 2) return [];
	const heights = upright.map(({ checkpoint }) => checkpoint.place[2]);
	const [low, high] = [Math.min(...heights), Math.max(...heights)];
	if (high - low < 0.5) return [];
	const third = (high - low) / 3;
	const bottom = upright.filter(({ checkpoint }) => checkpoint.place[2] <= low + third);
	const top = upright.filter(({ checkpoint }) => checkpoint.place[2] >= high - third);
	const face = upright.find(({ checkpoint }) => checkpoint.direction !== null)?.checkpoint.direction ?? [1, 0, 0];
	// The axis of the first face, turned so that it points east or, failing that, north: the sign does not hang on which face came first.
	const length = Math.hypot(face[0], face[1]);
	const turn = face[0] < -1e-9 * length || (Math.abs(face[0]) <= 1e-9 * length && face[1] < 0) ? -1 : 1;
	const first: Vector3 = [(turn * face[0]) / length, (turn * face[1]) / length, 0];
	const figures: DerivedFigure[] = [];
	for (const axis of [first, first[0] < 1e-9 ? ([first[1], 0, 0] as Vector3) : ([0 - first[1], first[0], 0] as Vector3)]) {
		const [below, above] = [shiftAt(bottom, axis), shiftAt(top, axis)];
		// A side seen at one end alone would make a thick element a leaning one.
		if (below === null || above === null || below.sides !== above.sides) continue;
		figures.push({
			elementId,
			label: `along ${axisWords(axis)} over ${(above.heightM - below.heightM).toFixed(1)} m`,
			deviationMm: above.mm - below.mm,
			terms: [...above.terms, ...below.terms.map(({ entry, weight }) => ({ entry, weight: scaled(weight, -1) }))],
			from: [...above.terms, ...below.terms].map(({ entry }) => entry.checkpoint.id),
		});
	}
	return figures;
}
