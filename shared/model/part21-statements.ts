/** The outermost layer of a Part 21 file: what kind of file the bytes are, and where its statements begin and end. */

/** Why a file is not read as Part 21, in words. */
export type Part21Refusal = { code: 'not-ifc' | 'cut-file'; message: string };

/** The engine counts a text's bytes in sixteen bits; longer ones lose the arguments after them. */
const LONG_TEXT = 60_000;

const SLASH = 47;
const STAR = 42;
const QUOTE = 39;
const SEMICOLON = 59;
export const HASH = 35;
export const EQUALS = 61;
export const PAREN = 40;

const isSpace = (byte: number): boolean => byte === 32 || (byte >= 9 && byte <= 13);
export const isDigit = (byte: number): boolean => byte >= 48 && byte <= 57;
const isWord = (byte: number): boolean =>
	(byte >= 65 && byte <= 90) || (byte >= 97 && byte <= 122) || byte === 95 || byte === 45 || isDigit(byte);

/** Whether these bytes (a text of Latin letters) stand at a position. */
export const startsWith = (bytes: Uint8Array, text: string, at = 0): boolean => {
	for (let i = 0; i < text.length; i++) if (bytes[at + i] !== text.charCodeAt(i)) return false;
	return true;
};

/** What the first bytes say where they are of another kind of file; null where they may be Part 21. */
export function recogniseOther(bytes: Uint8Array): Part21Refusal | null {
	const refuse = (message: string): Part21Refusal => ({ code: 'not-ifc', message });
	if (bytes.length === 0) return refuse('The file is empty (0 bytes).');
	if ((bytes[0] === 0xff && bytes[1] === 0xfe) || (bytes[0] === 0xfe && bytes[1] === 0xff))
		return refuse('The file is UTF-16 text. An IFC STEP file is ASCII or UTF-8: save it so from the program that wrote it.');
	if (startsWith(bytes, 'PK')) return refuse('The file is a ZIP archive (perhaps ifcZIP). Unpack it and send the .ifc file inside.');
	if (startsWith(bytes, '%PDF')) return refuse('The file is a PDF, not an IFC file.');
	let at = startsWith(bytes, '\u00ef\u00bb\u00bf') ? 3 : 0;
	while (at < bytes.length && isSpace(bytes[at]!)) at++;
	if (bytes[at] === 60) return refuse('The file is XML (perhaps ifcXML). Only the STEP form of IFC (.ifc, "ISO-10303-21;") is read.');
	return null;
}

type Statement = { start: number; end: number };

/** Walks the statements, one pass. `visit` gets the first byte that is neither space nor comment, and the position of the semicolon. */
export function forEachStatement(
	bytes: Uint8Array,
	from: number,
	onLongText: (start: number, end: number) => void,
	visit: (start: number, end: number) => boolean,
): Statement & { open: 'string' | 'comment' | 'statement' | null } {
	const size = bytes.length;
	let at = from;
	let start = -1;
	while (at < size) {
		const byte = bytes[at]!;
		if (byte === QUOTE) {
			if (start < 0) start = at;
			let close = bytes.indexOf(QUOTE, at + 1);
			while (close >= 0 && bytes[close + 1] === QUOTE) close = bytes.indexOf(QUOTE, close + 2);
			if (close < 0) return { start, end: at, open: 'string' };
			if (close - at > LONG_TEXT) onLongText(at + 1, close);
			at = close + 1;
		} else if (byte === SLASH && bytes[at + 1] === STAR) {
			const opened = at;
			at += 2;
			for (;;) {
				const star = bytes.indexOf(STAR, at);
				if (star < 0) return { start: start < 0 ? opened : start, end: opened, open: 'comment' };
				at = star + 1;
				if (bytes[at] === SLASH) break;
			}
			at++;
		} else if (byte === SEMICOLON) {
			if (start >= 0 && !visit(start, at)) return { start, end: at, open: null };
			start = -1;
			at++;
		} else {
			if (start < 0 && byte > 32) start = at;
			at++;
		}
	}
	return { start, end: size, open: start < 0 ? null : 'statement' };
}

/** Skips spaces and comments. */
export function skipBlank(bytes: Uint8Array, from: number, end: number): number {
	let at = from;
	while (at < end) {
		if (bytes[at]! <= 32) at++;
		else if (bytes[at] === SLASH && bytes[at + 1] === STAR) {
			at += 2;
			while (at < end && !(bytes[at] === STAR && bytes[at + 1] === SLASH)) at++;
			at += 2;
		} else break;
	}
	return at;
}

/** The word at a position, upper case; empty where there is none or it is endless. */
export const readWord = (bytes: Uint8Array, from: number, end: number): string => {
	let at = from;
	while (at < end && isWord(bytes[at]!)) at++;
	return at - from > 120 ? '' : String.fromCharCode(...bytes.subarray(from, at)).toUpperCase();
};
