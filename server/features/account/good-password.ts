import { Refused } from '../../platform/refuse.ts';
import { commonPasswordParts } from './common-passwords.ts';

/** Longest first, so that "qwertyuiop" goes before "qwerty". Two letters tell nothing. */
const parts = [...commonPasswordParts].sort((one, other) => other.length - one.length);
/** So many characters must be left once all that is common is taken out. */
const leastLeft = 5;

/** The digits and signs that stand for letters in most "clever" passwords. */
const leet: Readonly<Record<string, string>> = { '0': 'o', '1': 'i', '3': 'e', '4': 'a', '5': 's', '7': 't', '@': 'a', $: 's', '!': 'i' };

/**
 * REFUSED where a password is made of common words and runs, of one character over and over, or of the person's own name and address.
 * Length is the contract's (`newPassword`). `where` is the field.
 */
export function expectGoodPassword(password: string, own: readonly string[], where: string): void {
	if (isCommon(password, own)) {
		throw new Refused(
			'common-password',
			'This is among the first that anybody would try. Take a few words that do not belong together.',
			where,
		);
	}
}

/** Pure. `own`: name, address and the like. */
export function isCommon(password: string, own: readonly string[] = []): boolean {
	const ownWords = own
		.flatMap((text) => text.toLowerCase().split(/[^\p{L}\p{N}]+/u))
		.filter((word) => word.length >= 3)
		.sort((one, other) => other.length - one.length);
	const plain = password.toLowerCase();
	const unleeted = [...plain].map((sign) => leet[sign] ?? sign).join('');
	return [plain, unleeted].some((text) => leftOver(text, [...ownWords, ...parts]) < leastLeft);
}

/** How many different characters are left without the words, digits and signs at their joints; each word beyond the second counts as three. */
function leftOver(text: string, words: readonly string[]): number {
	let rest = text;
	let found = 0;
	for (const word of words) {
		if (word.length < 3 || !rest.includes(word)) continue;
		rest = rest.replaceAll(word, ' ');
		found += 1;
	}
	const bare = found === 0 ? rest : rest.replaceAll(/[\d\s\p{P}\p{S}]+/gu, '');
	return new Set(bare).size + 3 * Math.max(0, found - 2);
}
