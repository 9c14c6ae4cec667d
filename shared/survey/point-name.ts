/** Nothing in it to fold: the usual case, and the quick one. */
const plain = /^[!-,/-^`-~]*$/;

/**
 * The key under which two spellings of a point's name are the same: any case, and `-`, `_`, blank and dot alike.
 * Digits stay as written ("01" is not "1").
 */
export function pointNameKey(name: string): string {
	const lower = name.toLowerCase();
	if (plain.test(lower)) return lower;
	let key = '';
	let isGap = false;
	for (const letter of lower.normalize('NFC')) {
		if (letter === '-' || letter === '_' || letter === '.' || letter === '\u00a0' || letter.trim() === '') {
			isGap = true;
			continue;
		}
		if (isGap && key !== '') key += '-';
		isGap = false;
		key += letter;
	}
	return key;
}
