/** Powers of ten up to the nine decimals that are read quickly. */
const powersOfTen = Float64Array.from({ length: 10 }, (_, k) => 10 ** k);

/**
 * whole + fraction·10^(−decimals), correctly rounded: whole·10^decimals + fraction and the power are exact as doubles for at most fifteen digits
 * together, and one division rounds once (Clinger 1990, "How to read floating point numbers accurately", the fast path).
 */
export function scaledDecimal(whole: number, fraction: number, decimals: number): number {
	return decimals === 0 ? whole : (whole * powersOfTen[decimals]! + fraction) / powersOfTen[decimals]!;
}

/**
 * A number as people and instruments write it: sign (also U+2212), digits with one decimal mark, an exponent. Thousands may be parted by the
 * other mark only where the number has decimals too ("512.340,120"); alone it could be either. Null for all else: words, hex, NaN, Infinity.
 */
export function parseDecimal(text: string, decimalMark: '.' | ','): number | null {
	const plain = text.trim().replace('−', '-');
	const grouped = decimalMark === ',' ? /^[+-]?\d{1,3}(\.\d{3})+,\d+$/ : /^[+-]?\d{1,3}(,\d{3})+\.\d+$/;
	const joined = grouped.test(plain) ? plain.replaceAll(decimalMark === ',' ? '.' : ',', '') : plain;
	const pointed = decimalMark === ',' ? (joined.includes('.') ? '' : joined.replace(',', '.')) : joined;
	if (!/^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d{1,3})?$/.test(pointed)) return null;
	return Number(pointed);
}
