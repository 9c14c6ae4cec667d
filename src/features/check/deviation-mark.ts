import type { Deviation } from '#shared/check/check-schema.ts';
import { type GlyphKind, glyphKindOf } from '#src/ui/glyph-kind.ts';

/** A deviation as it is drawn on model and plan. Design frame, metres. */
export interface DeviationMark {
	readonly checkpointId: string;
	readonly elementId: string;
	readonly kind: GlyphKind;
	readonly place: readonly [number, number, number];
	/** Outward unit normal of a face; null for a level or a place in plan. */
	readonly normal: readonly [number, number, number] | null;
	/** As-built less design: what the line shows, many times over; null where nothing was measured. */
	readonly shiftM: readonly [number, number, number] | null;
}

/** Drawn one after the other, what is off last, so that it lies on top. */
export const drawingOrder: readonly GlyphKind[] = ['none', 'within', 'close', 'shy', 'proud', 'plan'];

/** Which way the as-built lies from the design: along the outward normal, up or down, or in plan. */
function shiftOf({ characteristic, direction, deviationMm, offsetMm }: Deviation): DeviationMark['shiftM'] {
	if (characteristic === 'plan') return offsetMm === null ? null : [offsetMm[0] / 1000, offsetMm[1] / 1000, 0];
	if (deviationMm === null) return null;
	const along = direction ?? [0, 0, 1];
	return [(along[0] * deviationMm) / 1000, (along[1] * deviationMm) / 1000, (along[2] * deviationMm) / 1000];
}

/** One mark a deviation, in the order they are to be drawn. */
export function marksOf(deviations: readonly Deviation[]): DeviationMark[] {
	return deviations
		.map(
			(deviation): DeviationMark => ({
				checkpointId: deviation.checkpointId,
				elementId: deviation.elementId,
				kind: glyphKindOf(deviation),
				place: deviation.place,
				normal: deviation.direction,
				shiftM: shiftOf(deviation),
			}),
		)
		.sort((a, b) => drawingOrder.indexOf(a.kind) - drawingOrder.indexOf(b.kind));
}

/** Rings of what is within: smaller where there are thousands, so that they stay the quiet ground of the picture. CSS pixels. */
export function ringRadiusPx(markCount: number): number {
	return Math.max(1.7, Math.min(3.3, 3.3 - (1.6 * (markCount - 300)) / 1500));
}

/** Whether a mark has a line: what is off or too close, not what is within. */
export function hasLine(mark: DeviationMark): boolean {
	return mark.shiftM !== null && mark.kind !== 'within' && mark.kind !== 'none';
}

/**
 * How many times over the lines are drawn: of 1, 2, 5, 10 … 1000 the one with which the usual longest line (nine of ten) is about a
 * fifteenth of the work. `sizeM`: the longer side of what is shown.
 */
export function exaggerationOf(marks: readonly DeviationMark[], sizeM: number): number {
	const lengths = marks
		.filter(hasLine)
		.map((mark) => Math.hypot(...mark.shiftM!))
		.sort((a, b) => a - b);
	const usualM = lengths[Math.floor(lengths.length * 0.9)] ?? 0.01;
	const wanted = sizeM / 15 / Math.max(usualM, 1e-4);
	return [1000, 500, 200, 100, 50, 20, 10, 5, 2].find((step) => step <= wanted * 1.25) ?? 1;
}

/** Where a press falls nearest. Marks drawn later win a tie; within `reachPx`, else null. Places in pixels, x and y of each mark in turn. */
export function nearestMark(
	placesPx: ArrayLike<number>,
	x: number,
	y: number,
	reachPx: number,
	penaltyPx?: (mark: number) => number,
): number | null {
	let best: number | null = null;
	let bestPx = reachPx;
	for (let mark = 0; 2 * mark < placesPx.length; mark++) {
		const awayPx = Math.hypot(placesPx[2 * mark]! - x, placesPx[2 * mark + 1]! - y);
		if (awayPx > reachPx) continue;
		const countedPx = awayPx + (penaltyPx?.(mark) ?? 0);
		if (countedPx <= bestPx) {
			best = mark;
			bestPx = countedPx;
		}
	}
	return best;
}
