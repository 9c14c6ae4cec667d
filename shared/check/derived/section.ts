import type { Vector3 } from '../../geometry/frame.ts';
import type { DerivedFigure, MeasuredCheckpoint } from './linear-uncertainty.ts';

/** How far beside each other two opposite checkpoints may lie to tell of one section, metres. */
const besideM = 0.3;

/**
 * Section sizes: two faces that look opposite ways at one place, + is thick. The sum of their deviations, so that a shift of the element as a whole,
 * of the fit or of the common part cancels. Each face is used once, with the nearest opposite one.
 */
export function sectionFigures(elementId: string, entries: readonly MeasuredCheckpoint[]): DerivedFigure[] {
	const faces = entries.filter(({ checkpoint }) => checkpoint.characteristic === 'face' && checkpoint.direction !== null);
	const pairs: { a: MeasuredCheckpoint; b: MeasuredCheckpoint; asideM: number; thicknessM: number }[] = [];
	for (let i = 0; i < faces.length; i++) {
		for (let j = 0; j < i; j++) {
			const [a, b] = [faces[j]!, faces[i]!];
			const [na, nb] = [a.checkpoint.direction!, b.checkpoint.direction!];
			if (na[0] * nb[0] + na[1] * nb[1] + na[2] * nb[2] > -0.9999) continue;
			const apart = [0, 1, 2].map((axis) => a.checkpoint.place[axis]! - b.checkpoint.place[axis]!) as unknown as Vector3;
			const thicknessM = apart[0] * na[0] + apart[1] * na[1] + apart[2] * na[2];
			const asideM = Math.hypot(apart[0] - thicknessM * na[0], apart[1] - thicknessM * na[1], apart[2] - thicknessM * na[2]);
			if (asideM <= besideM && thicknessM > 0) pairs.push({ a, b, asideM, thicknessM });
		}
	}
	pairs.sort((p, q) => p.asideM - q.asideM || p.thicknessM - q.thicknessM);
	const used = new Set<MeasuredCheckpoint>();
	const figures: DerivedFigure[] = [];
	for (const { a, b, thicknessM } of pairs) {
		if (used.has(a) || used.has(b)) continue;
		used.add(a);
		used.add(b);
		figures.push({
			elementId,
			label: `section of ${(thicknessM * 1000).toFixed(0)} mm`,
			deviationMm: a.measured.deviationMm + b.measured.deviationMm,
			terms: [a, b].map((entry) => ({ entry, weight: entry.checkpoint.direction! })),
			from: [a.checkpoint.id, b.checkpoint.id],
		});
	}
	return figures;
}
