import { decodeBytes, decodePart21String } from './part21-text.ts';

/** A value in a Part 21 statement. `$`, `*` and what is no value at all (NaN, stray words) are null; a list is an array. */
export type Part21Value = null | number | string | Part21Reference | Part21Enumeration | Part21Typed | readonly Part21Value[];
export type Part21Reference = { readonly ref: number };
export type Part21Enumeration = { readonly name: string };
/** IFCLENGTHMEASURE(0.3048). */
export type Part21Typed = { readonly type: string; readonly of: readonly Part21Value[] };

const HASH = 35;
const QUOTE = 39;
const OPEN = 40;
const CLOSE = 41;
const STAR = 42;
const COMMA = 44;
const DOT = 46;
const SLASH = 47;
const SEMICOLON = 59;
const DOUBLE_QUOTE = 34;

const isWordByte = (byte: number): boolean =>
	(byte >= 48 && byte <= 57) || (byte >= 65 && byte <= 90) || (byte >= 97 && byte <= 122) || byte === 95;
const isNumberByte = (byte: number): boolean =>
	(byte >= 48 && byte <= 57) || byte === DOT || byte === 43 || byte === 45 || byte === 69 || byte === 101;
const isNumberStart = (byte: number): boolean => (byte >= 48 && byte <= 57) || byte === 43 || byte === 45;

/** Short ASCII runs without an intermediate copy. */
function asciiText(bytes: Uint8Array, from: number, to: number): string {
	let text = '';
	for (let at = from; at < to; at++) text += String.fromCharCode(bytes[at]!);
	return text;
}

type Open = { values: Part21Value[]; type: string | null };

/**
 * The arguments between the parenthesis at `open` and its closing one. Deep nesting is followed with a stack of our own.
 * Stops at a semicolon or the end of the bytes where parentheses do not close; `end` is the position after the last byte read.
 */
export function parseArguments(bytes: Uint8Array, open: number): { values: readonly Part21Value[]; end: number } {
	const root: Open = { values: [], type: null };
	const stack: Open[] = [];
	let current = root;
	let at = open + 1;
	let word: string | null = null;
	const size = bytes.length;
	if (bytes[open] !== OPEN) return { values: [], end: open };
	// A slot begins after "(" and ",": what is read fills it, an empty one between commas counts as null.
	let isFilled = false;
	const fill = (value: Part21Value): void => {
		if (!isFilled) current.values.push(value);
		isFilled = true;
	};
	while (at < size) {
		const byte = bytes[at]!;
		if (byte <= 32) at++;
		else if (byte === COMMA) {
			if (!isFilled) current.values.push(null);
			isFilled = false;
			word = null;
			at++;
		} else if (byte === OPEN) {
			stack.push(current);
			current = { values: [], type: word };
			word = null;
			isFilled = false;
			at++;
		} else if (byte === CLOSE) {
			at++;
			if (word !== null && !isFilled) fill(null);
			word = null;
			const done = current;
			const parent = stack.pop();
			if (!parent) return { values: root.values, end: at };
			current = parent;
			isFilled = false;
			fill(done.type === null ? done.values : { type: done.type, of: done.values });
		} else if (byte === HASH) {
			let number = 0;
			let next = at + 1;
			while (next < size && bytes[next]! >= 48 && bytes[next]! <= 57) number = number * 10 + bytes[next++]! - 48;
			fill(next === at + 1 ? null : { ref: number });
			at = next;
		} else if (byte === QUOTE) {
			let close = at + 1;
			for (;;) {
				close = bytes.indexOf(QUOTE, close);
				if (close < 0) return { values: root.values, end: size };
				if (bytes[close + 1] !== QUOTE) break;
				close += 2;
			}
			fill(decodePart21String(decodeBytes(bytes.subarray(at + 1, close))));
			at = close + 1;
		} else if (isNumberStart(byte)) {
			let next = at + 1;
			while (next < size && isNumberByte(bytes[next]!)) next++;
			const number = Number(asciiText(bytes, at, next));
			fill(Number.isNaN(number) ? null : number);
			at = next;
		} else if (byte === DOT) {
			let next = at + 1;
			while (next < size && isWordByte(bytes[next]!)) next++;
			if (bytes[next] === DOT) {
				fill({ name: asciiText(bytes, at + 1, next).toUpperCase() });
				next++;
			} else fill(null);
			at = next;
		} else if (byte === SLASH && bytes[at + 1] === STAR) {
			at += 2;
			while (at < size && !(bytes[at] === STAR && bytes[at + 1] === SLASH)) at++;
			at += 2;
		} else if (byte === DOUBLE_QUOTE) {
			const close = bytes.indexOf(DOUBLE_QUOTE, at + 1);
			fill(null);
			if (close < 0) return { values: root.values, end: size };
			at = close + 1;
		} else if (byte === SEMICOLON) {
			return { values: root.values, end: at };
		} else if (isWordByte(byte)) {
			let next = at + 1;
			while (next < size && isWordByte(bytes[next]!)) next++;
			word = asciiText(bytes, at, next).toUpperCase();
			at = next;
		} else {
			// `$`, `*` and anything unknown.
			fill(null);
			at++;
		}
	}
	return { values: root.values, end: size };
}

/** The entity number a value points to, else null. */
export function refOf(value: Part21Value | undefined): number | null {
	return typeof value === 'object' && value !== null && 'ref' in value ? value.ref : null;
}

/** A number, bare or inside its measure type; null for all else and what is not finite. */
export function numberOf(value: Part21Value | undefined): number | null {
	let inner = value;
	if (typeof inner === 'object' && inner !== null && 'of' in inner) inner = inner.of[0];
	return typeof inner === 'number' && Number.isFinite(inner) ? inner : null;
}

/** Text, bare or inside its type; null for all else. */
export function textOf(value: Part21Value | undefined): string | null {
	let inner = value;
	if (typeof inner === 'object' && inner !== null && 'of' in inner) inner = inner.of[0];
	return typeof inner === 'string' ? inner : null;
}

/** The word of an enumeration (.MILLI. → MILLI), else null. */
export function enumerationOf(value: Part21Value | undefined): string | null {
	return typeof value === 'object' && value !== null && 'name' in value ? value.name : null;
}

/** A list's members; empty for all else. */
export function listOf(value: Part21Value | undefined): readonly Part21Value[] {
	return Array.isArray(value) ? value : [];
}

/** The entity numbers in a list, or a single one. */
export function refsOf(value: Part21Value | undefined): number[] {
	const single = refOf(value);
	if (single !== null) return [single];
	const found: number[] = [];
	for (const member of listOf(value)) {
		const ref = refOf(member);
		if (ref !== null) found.push(ref);
	}
	return found;
}

/** The finite numbers of a list of numbers, bare or typed; null where one is not a finite number. */
export function numbersOf(value: Part21Value | undefined): number[] | null {
	const found: number[] = [];
	for (const member of listOf(value)) {
		const number = numberOf(member);
		if (number === null) return null;
		found.push(number);
	}
	return found;
}
