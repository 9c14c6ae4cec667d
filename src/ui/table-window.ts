import { defaultRangeExtractor, type Range } from '@tanstack/react-virtual';

/** A drawn line, or the empty height in place of lines that are out of sight. */
export type WindowPart = { kind: 'line'; index: number } | { kind: 'space'; before: number; heightPx: number };

/** The lines in sight, and one more that must stay drawn because it may hold the focus. Ascending. */
export function withKept(range: Range, kept: number): number[] {
	const inSight = defaultRangeExtractor(range);
	if (kept < 0 || inSight.includes(kept)) return inSight;
	return [...inSight, kept].sort((a, b) => a - b);
}

/** Drawn lines with spacers for every gap, so that the whole keeps its height. `indices` ascending. */
export function windowParts(indices: readonly number[], lineCount: number, lineHeightPx: number): WindowPart[] {
	const parts: WindowPart[] = [];
	let next = 0;
	for (const index of indices) {
		if (index >= lineCount) break;
		if (index > next) parts.push({ kind: 'space', before: index, heightPx: (index - next) * lineHeightPx });
		parts.push({ kind: 'line', index });
		next = index + 1;
	}
	if (next < lineCount) parts.push({ kind: 'space', before: lineCount, heightPx: (lineCount - next) * lineHeightPx });
	return parts;
}
