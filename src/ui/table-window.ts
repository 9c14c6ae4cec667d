import { defaultRangeExtractor, type Range } from '@tanstack/react-virtual';

/** A drawn line, or the empty height in place of lines that are out of sight. */
export type WindowPart = { kind: 'line'; index: number } | { kind: 'space'; before: number; heightPx: number };

/** The lines in sight, and one more that must stay drawn because it may hold the focus. Ascending. */
export function withKept(range: Range, kept: number): number[] {
	const inSight = defaultRangeExtractor(range);
	if (kept < 0 || inSight.includes(kept)) return inSight;
	return [...inSight, kept].sort((a, b) => a - b);
}

/** Where each line begins, and after the last one where all end: `offsets.length` is one more than there are lines. */
export function lineOffsets(heightsPx: readonly number[]): number[] {
	const offsets = [0];
	for (const heightPx of heightsPx) offsets.push((offsets.at(-1) ?? 0) + heightPx);
	return offsets;
}

/** Drawn lines with spacers for every gap, so that the whole keeps its height. `indices` ascending; offsets as `lineOffsets` gives them. */
export function windowParts(indices: readonly number[], offsets: readonly number[]): WindowPart[] {
	const lineCount = offsets.length - 1;
	const parts: WindowPart[] = [];
	const gap = (from: number, to: number) => {
		if (to > from) parts.push({ kind: 'space', before: to, heightPx: (offsets[to] ?? 0) - (offsets[from] ?? 0) });
	};
	let next = 0;
	for (const index of indices) {
		if (index >= lineCount) break;
		gap(next, index);
		parts.push({ kind: 'line', index });
		next = index + 1;
	}
	gap(next, lineCount);
	return parts;
}
