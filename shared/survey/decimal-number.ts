/** Powers of ten that a double holds exactly. */
const powersOfTen = Array.from({ length: 23 }, (_, k) => 10 ** k);

/**
 * mantissa·10^(−decimals), correctly rounded: both are exact as doubles up to 2⁵³ and 10²², and one division rounds once
 * (Clinger 1990, "How to read floating point numbers accurately", the fast path). Null where they are not exact.
 */
export function scaledDecimal(mantissa: number, decimals: number): number | null {
	return mantissa <= Number.MAX_SAFE_INTEGER && decimals <= 22 ? mantissa / powersOfTen[decimals]! : null;
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
