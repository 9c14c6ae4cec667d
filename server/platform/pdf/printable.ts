/** Signs that our fonts lack, in words: a glyph that is missing vanishes from a PDF without an error. */
const words: readonly (readonly [RegExp, string])[] = [
	[/χ²/g, 'chi-square'],
	[/σ̂₀²/g, 'variance factor'],
	[/σ̂₀/g, 'root of the variance factor'],
	[/vᵀPv/g, 'vtPv'],
	[/[µμ]m\b/g, 'micrometres'],
	[/[µμ]/g, 'micro'],
	[/σ/g, 's.d.'],
	[/Σ/g, 'sum'],
	[/Δ/g, 'difference'],
	[/[→⟶]/g, 'to'],
	[/≤/g, 'at most'],
	[/≥/g, 'at least'],
	[/≈/g, 'about'],
	[/″/g, ' arc seconds'],
	[/′/g, ' arc minutes'],
	[/[\u00a0\u202f\u2009]/g, ' '],
	[/‑/g, '-'],
];

export interface TextRun {
	text: string;
	/** From the font of the wider alphabet. */
	isExtended: boolean;
}

/**
 * A text as runs that have every glyph: known signs become words, letters of the wider alphabet their own run, and what neither font has
 * is written by its number, "[U+0416]", so that nothing vanishes.
 * @param has whether a font has a glyph for a code point
 */
export function printableRuns(text: string, has: (codePoint: number, isExtended: boolean) => boolean): TextRun[] {
	const runs: TextRun[] = [];
	for (const character of inWords(text).normalize('NFC')) {
		const codePoint = character.codePointAt(0) ?? 0xfffd;
		const isPlain = has(codePoint, false);
		const isExtended = !isPlain && has(codePoint, true);
		const piece = isPlain || isExtended ? character : `[U+${codePoint.toString(16).toUpperCase().padStart(4, '0')}]`;
		const last = runs.at(-1);
		if (last && last.isExtended === isExtended) last.text += piece;
		else runs.push({ text: piece, isExtended });
	}
	return runs;
}

/** Signs in words, before any font is asked. */
export function inWords(text: string): string {
	return words.reduce((said, [sign, word]) => said.replace(sign, word), text);
}
