/** Figures in millimetres as the product writes them: a real minus sign (U+2212), no trailing zeros unless decimals are asked for. */

/** Rounded to `decimals`, halves away from zero; a rounded zero has no sign. */
function fixed(valueMm: number, decimals: number): string {
	const scale = 10 ** decimals;
	// The small share lets 1.005 (stored just below) round as it is written.
	const steps = Math.round(Math.abs(valueMm) * scale * (1 + 2 * Number.EPSILON));
	return (steps / scale).toFixed(decimals);
}

/** "6", "6.4": the size alone, without sign. */
export function plainMm(valueMm: number, decimals: number): string {
	return fixed(valueMm, decimals);
}

/** "+16", "−10", "0": with its sign. */
export function signedMm(valueMm: number, decimals: number): string {
	const text = fixed(valueMm, decimals);
	if (Number(text) === 0) return text;
	return `${valueMm < 0 ? '−' : '+'}${text}`;
}

/** A limit as it stands in a sheet, to hundredths at most: "10", "6.35". */
export function limitText(valueMm: number): string {
	return String(Math.round(Math.abs(valueMm) * 100 * (1 + 2 * Number.EPSILON)) / 100);
}

/** The same with its sign: "+10", "−6.35", "0". */
export function signedLimitText(valueMm: number): string {
	const text = limitText(valueMm);
	return Number(text) === 0 ? '0' : `${valueMm < 0 ? '−' : '+'}${text}`;
}
