import {
	EQUALS,
	forEachStatement,
	HASH,
	isDigit,
	PAREN,
	type Part21Refusal,
	readWord,
	recogniseOther,
	skipBlank,
	startsWith,
} from './part21-statements.ts';
import { type Part21Value, parseArguments } from './part21-value.ts';

/**
 * A reader of ISO 10303-21 clear text files ("Part 21", the form of an .ifc file): finds where each statement starts in one pass over the
 * bytes, parses a statement only when it is asked for. Linear in the size of the file; no recursion. It knows nothing of IFC.
 */

/** One entity: its type as written (upper case) and its arguments; `$` and `*` are both null, in their places. */
export type Part21Entity = { number: number; type: string; args: readonly Part21Value[] };

export type Part21File = {
	/** Names in FILE_SCHEMA, upper case, as written. */
	schemas: readonly string[];
	/** Where the list of names in FILE_SCHEMA begins and ends, so that it can be rewritten. */
	schemaSpan: readonly [start: number, end: number] | null;
	/** Texts longer than the geometry engine can hold: where their inside begins and ends. */
	longTexts: readonly (readonly [start: number, end: number])[];
	entityCount: number;
	/** Numbers given twice: the last one counts. */
	repeatedNumbers: readonly number[];
	/** Entities could not be told apart from noise at these byte positions (at most 20 are kept). */
	oddStatements: number;
	hasIsoLine: boolean;
	hasEndLine: boolean;
	has: (number: number) => boolean;
	typeOf: (number: number) => string | null;
	/** Parsed anew at each call; null where there is none. */
	entity: (number: number) => Part21Entity | null;
	/** Entity numbers of these types (upper case), in file order. */
	ofType: (...types: readonly string[]) => number[];
	/** How many there are of each type. */
	typeCounts: () => Map<string, number>;
};

/** Growing typed arrays: entity numbers, the position after the type's name and the type's index, in file order. */
class EntityIndex {
	numbers = new Float64Array(1024);
	bodies = new Uint32Array(1024);
	types = new Uint16Array(1024);
	count = 0;

	push(number: number, body: number, type: number): void {
		if (this.count === this.numbers.length) {
			const size = this.count * 2;
			const numbers = new Float64Array(size);
			numbers.set(this.numbers);
			const bodies = new Uint32Array(size);
			bodies.set(this.bodies);
			const types = new Uint16Array(size);
			types.set(this.types);
			this.numbers = numbers;
			this.bodies = bodies;
			this.types = types;
		}
		this.numbers[this.count] = number;
		this.bodies[this.count] = body;
		this.types[this.count++] = type;
	}
}

/** Positions in the index in the order of entity numbers; null where the file order is that already. */
function orderByNumber(index: EntityIndex): Uint32Array | null {
	let isAscending = true;
	for (let i = 1; i < index.count && isAscending; i++) isAscending = index.numbers[i]! > index.numbers[i - 1]!;
	if (isAscending) return null;
	const order = new Uint32Array(index.count);
	for (let i = 0; i < order.length; i++) order[i] = i;
	return order.sort((a, b) => index.numbers[a]! - index.numbers[b]! || a - b);
}

/**
 * Opens a Part 21 file given as bytes (kept, not copied).
 * Refused: another kind of file (empty, ZIP, PDF, XML, UTF-16, no DATA section) and files that end in the middle; both say where.
 */
export function openPart21(bytes: Uint8Array): { ok: true; file: Part21File } | { ok: false; refusal: Part21Refusal } {
	const other = recogniseOther(bytes);
	if (other) return { ok: false, refusal: other };

	const index = new EntityIndex();
	const typeIndex = new Map<string, number>();
	const typeNames: string[] = [];
	const schemas: string[] = [];
	let schemaSpan: [number, number] | null = null;
	let hasIsoLine = false;
	let hasEndLine = false;
	let hasHeader = false;
	let hasData = false;
	let isDataClosed = false;
	let oddStatements = 0;
	let lastNumber: number | null = null;

	const readEntity = (start: number, end: number): void => {
		let at = skipBlank(bytes, start + 1, end);
		let number = 0;
		let digits = 0;
		while (at < end && isDigit(bytes[at]!)) {
			number = number * 10 + bytes[at]! - 48;
			digits++;
			at++;
		}
		at = skipBlank(bytes, at, end);
		if (digits === 0 || bytes[at] !== EQUALS || number > Number.MAX_SAFE_INTEGER) {
			oddStatements++;
			return;
		}
		at = skipBlank(bytes, at + 1, end);
		const type = readWord(bytes, at, end);
		at = skipBlank(bytes, at + type.length, end);
		if (bytes[at] !== PAREN) {
			oddStatements++;
			return;
		}
		let code = typeIndex.get(type);
		if (code === undefined) {
			// More kinds than any schema has: only a hostile file; they are kept under one nameless kind.
			if (typeNames.length >= 60_000) code = typeIndex.get('') ?? 0;
			else {
				code = typeNames.length;
				typeNames.push(type);
				typeIndex.set(type, code);
			}
		}
		index.push(number, at, code);
		lastNumber = number;
	};

	const from = startsWith(bytes, '\u00ef\u00bb\u00bf') ? 3 : 0;
	let isFirst = true;
	const longTexts: [number, number][] = [];
	const onLongText = (start: number, end: number): void => {
		longTexts.push([start, end]);
	};
	const stop = forEachStatement(bytes, from, onLongText, (start, end) => {
		if (bytes[start] === HASH) {
			if (!hasData) oddStatements++;
			else readEntity(start, end);
			isFirst = false;
			return true;
		}
		const word = readWord(bytes, start, end);
		if (word.startsWith('ISO-10303-21')) hasIsoLine = true;
		else if (word.startsWith('END-ISO-10303-21')) hasEndLine = true;
		else if (word === 'HEADER') hasHeader = true;
		else if (word === 'DATA') {
			hasData = true;
			isDataClosed = false;
		} else if (word === 'ENDSEC') {
			if (hasData) isDataClosed = true;
		} else if (word === 'FILE_SCHEMA' && !hasData) {
			const open = skipBlank(bytes, start + word.length, end);
			const [names] = parseArguments(bytes, open).values;
			for (const name of Array.isArray(names) ? names : [names]) if (typeof name === 'string') schemas.push(name.trim().toUpperCase());
			schemaSpan = [start, end];
		} else if (isFirst && !hasIsoLine) return end - start < 4096 && start < 4096;
		else if (word === '') oddStatements++;
		isFirst = false;
		return true;
	});

	const where = lastNumber === null ? `at byte ${stop.start}` : `after entity #${lastNumber}`;
	if (!hasIsoLine && !hasHeader && !hasData)
		return {
			ok: false,
			refusal: { code: 'not-ifc', message: 'The file does not begin with "ISO-10303-21;" and has no HEADER: it is not an IFC STEP file.' },
		};
	if (stop.open === 'string')
		return {
			ok: false,
			refusal: { code: 'cut-file', message: `A text that is opened ${where} is never closed: the file is cut short or damaged there.` },
		};
	if (stop.open === 'comment')
		return {
			ok: false,
			refusal: { code: 'cut-file', message: `A comment that is opened ${where} is never closed: the file is cut short or damaged there.` },
		};
	if (!hasData)
		return { ok: false, refusal: { code: 'not-ifc', message: 'The file has no DATA section: there is nothing in it to read.' } };
	if (!isDataClosed)
		return {
			ok: false,
			refusal: {
				code: 'cut-file',
				message: `The file ends ${where}, before its DATA section is closed: it was cut short. Copy or export it again.`,
			},
		};

	const order = orderByNumber(index);
	const { numbers, bodies, types, count } = index;
	const at = (rank: number): number => (order ? order[rank]! : rank);
	const find = (number: number): number => {
		let low = 0;
		let high = count;
		// The last of equal numbers.
		while (low < high) {
			const middle = (low + high) >>> 1;
			if (numbers[at(middle)]! <= number) low = middle + 1;
			else high = middle;
		}
		if (low === 0) return -1;
		const position = at(low - 1);
		return numbers[position] === number ? position : -1;
	};
	const repeatedNumbers: number[] = [];
	if (order)
		for (let i = 1; i < count; i++)
			if (numbers[order[i]!] === numbers[order[i - 1]!] && repeatedNumbers.at(-1) !== numbers[order[i]!])
				repeatedNumbers.push(numbers[order[i]!]!);

	return {
		ok: true,
		file: {
			schemas,
			schemaSpan,
			longTexts,
			entityCount: count,
			repeatedNumbers,
			oddStatements,
			hasIsoLine,
			hasEndLine,
			has: (number) => find(number) >= 0,
			typeOf: (number) => {
				const position = find(number);
				return position < 0 ? null : typeNames[types[position]!]!;
			},
			entity: (number) => {
				const position = find(number);
				if (position < 0) return null;
				return { number, type: typeNames[types[position]!]!, args: parseArguments(bytes, bodies[position]!).values };
			},
			ofType: (...wanted) => {
				const codes = new Set<number>();
				for (const type of wanted) {
					const code = typeIndex.get(type);
					if (code !== undefined) codes.add(code);
				}
				const found: number[] = [];
				if (codes.size === 0) return found;
				for (let i = 0; i < count; i++) {
					if (codes.has(types[i]!) && (repeatedNumbers.length === 0 || find(numbers[i]!) === i)) found.push(numbers[i]!);
				}
				return found;
			},
			typeCounts: () => {
				const counts = new Map<string, number>();
				for (let i = 0; i < count; i++) counts.set(typeNames[types[i]!]!, (counts.get(typeNames[types[i]!]!) ?? 0) + 1);
				return counts;
			},
		},
	};
}
