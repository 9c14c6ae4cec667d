import { pointTableLimits } from './table-bytes.ts';

/** Characters that are not seen or turn the direction of writing: zero-width, marks of direction, embeddings, isolates, soft hyphen. */
const unseen = /[\u00ad\u061c\u180e\u200b-\u200f\u202a-\u202e\u2060-\u2064\u2066-\u206f\ufeff\ufff9-\ufffb]/g;
const plainAscii = /^[\x21-\x7e](?:[\x20-\x7e]*[\x21-\x7e])?$/;

/** The usual name, which needs no further look. */
const plainName = /^[A-Za-z0-9][A-Za-z0-9 ._/-]*$/;

/** A name or code as it may be stored and shown: unseen characters taken out, line ends and runs of blanks made one blank. */
export function cleanText(raw: string): { text: string; wasCleaned: boolean } {
	if (plainAscii.test(raw)) return { text: raw, wasCleaned: false };
	const seen = raw.replace(unseen, '');
	return { text: seen.replace(/\s+/g, ' ').trim().normalize('NFC'), wasCleaned: seen !== raw };
}

/** Why a text cannot be a point's name, as the end of a sentence; null where it can. */
export function whyNoName(name: string): string | null {
	if (name === '') return 'it has no name.';
	if (name.length <= pointTableLimits.nameLength && plainName.test(name)) return null;
	if (name.length > pointTableLimits.nameLength)
		return `its name has ${name.length} characters; at most ${pointTableLimits.nameLength} are kept.`;
	if (/[\p{Cc}\ufffd]/u.test(name)) return 'its name holds control characters or bytes that are no letters.';
	// What a spreadsheet would run when the list is opened there; a sign before a figure ("+0.00", "-2") is a name.
	if (/^[=@]/.test(name) || /^[+-].*[(!|]/.test(name)) return `its name '${name}' would be a formula in a spreadsheet.`;
	return null;
}
