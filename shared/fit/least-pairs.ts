import type { FitKind } from './fit-schema.ts';

/** Which of the seven small changes each fit has as unknowns, in the order shift E, N, H, turns about E, N, H, relative scale; and its least pairs. */

const unknowns: Record<FitKind, readonly number[]> = {
	height: [2],
	levelled: [0, 1, 2, 5],
	'levelled-scaled': [0, 1, 2, 5, 6],
	free: [0, 1, 2, 3, 4, 5],
	'free-scaled': [0, 1, 2, 3, 4, 5, 6],
};

/** Indices into [shift E, shift N, shift H, turn E, turn N, turn H, relative scale], rising. */
export function fitUnknowns(kind: FitKind): readonly number[] {
	return unknowns[kind];
}

/** The fewest pairs that determine the fit: 1 for height, 2 apart in plan when levelled, 3 not on a line when free. */
export function leastPairs(kind: FitKind): number {
	return kind === 'height' ? 1 : isLevelled(kind) ? 2 : 3;
}

/** The fit turns about the vertical only. */
export function isLevelled(kind: FitKind): boolean {
	return kind === 'levelled' || kind === 'levelled-scaled';
}

/** The scale is one of the unknowns. */
export function isScaled(kind: FitKind): boolean {
	return kind === 'levelled-scaled' || kind === 'free-scaled';
}
