import { parseDecimal, scaledDecimal } from './decimal-number.ts';
import { type PointField, type PointTableReading, pointFields } from './point-table-schema.ts';
import { pointTableLimits, type ScannableText } from './table-bytes.ts';

/** A point file in columns, one slot a row and field: no object for a row or a cell. NaN and empty spans stand for empty cells. */
export interface PointColumns {
	count: number;
	/** Row as a spreadsheet counts it: from 1, the header and blank rows included. */
	readonly row: Int32Array;
	/** Number fields in the file's own unit, by field. */
	readonly numbers: ReadonlyMap<PointField, Float64Array>;
	/** Text fields as spans of bytes: start and end, by field; a span that begins with a quote holds it. */
	readonly texts: ReadonlyMap<PointField, Int32Array>;
	/** Cells that are neither empty nor a number, in order. */
	readonly badNumbers: { index: number; field: PointField; start: number; end: number; isNotFinite: boolean }[];
	/** Rows that cannot be cut into cells. */
	readonly badRows: { row: number; why: 'too-long' | 'quote' | 'control' | 'many-cells' }[];
	/** All of them; `badRows` keeps at most 1000. */
	readonly badRowCount: number;
	/** Rows beyond the most that are read. */
	readonly isCut: boolean;
}

const textFields: ReadonlySet<PointField> = new Set(['name', 'code', 'setup']);
const [LF, CR, QUOTE, BLANK, TAB] = [10, 13, 34, 32, 9];

/** How many bad cells are kept: enough to show, not enough to fill the memory. */
const mostBad = 1000;

/**
 * Cuts a point file into columns in one pass over its bytes; numbers are read where they stand. Quotes as in RFC 4180; lines end with
 * LF, CR LF or CR. `headerCells` (0: not known) is how many cells a row may have at most.
 */
export function scanPoints(text: ScannableText, reading: PointTableReading, headerCells = 0): PointColumns {
	const { bytes } = text;
	const size = bytes.length;
	const delimiter = reading.delimiter.charCodeAt(0);
	const isBlankDelimited = delimiter === BLANK;
	const mark = reading.decimalMark.charCodeAt(0);
	// One look per byte of text: 1 ends a cell, 2 has no place in a text.
	const stops = new Uint8Array(256);
	for (let byte = 0; byte < 32; byte++) stops[byte] = byte === TAB ? 0 : 2;
	stops[delimiter] = stops[LF] = stops[CR] = 1;
	const fields = pointFields.filter((field) => reading.columns[field] !== undefined);
	const width = Math.max(...fields.map((field) => reading.columns[field]!), 0) + 1;
	const rowLimit = Math.min(pointTableLimits.rows, size) + 1;
	let capacity = Math.min(rowLimit, 64 + Math.ceil((1.1 * size) / rowLength(bytes)));
	let row = new Int32Array(capacity);
	const numbers = new Map<PointField, Float64Array>();
	const texts = new Map<PointField, Int32Array>();
	for (const field of fields) {
		if (textFields.has(field)) texts.set(field, new Int32Array(2 * capacity));
		else numbers.set(field, new Float64Array(capacity));
	}
	const numberAt: (Float64Array | null)[] = new Array(width).fill(null);
	const textAt: (Int32Array | null)[] = new Array(width).fill(null);
	const fieldAt: (PointField | null)[] = new Array(width).fill(null);
	let numberColumns: Float64Array[] = [];
	const bind = (): void => {
		numberColumns = [...numbers.values()];
		for (const field of fields) {
			const column = reading.columns[field]!;
			fieldAt[column] = field;
			numberAt[column] = numbers.get(field) ?? null;
			textAt[column] = texts.get(field) ?? null;
		}
	};
	bind();
	const grow = (): void => {
		capacity = Math.min(rowLimit, capacity * 2);
		const more = new Int32Array(capacity);
		more.set(row);
		row = more;
		for (const [field, column] of numbers) {
			const larger = new Float64Array(capacity);
			larger.set(column);
			numbers.set(field, larger);
		}
		for (const [field, column] of texts) {
			const larger = new Int32Array(2 * capacity);
			larger.set(column);
			texts.set(field, larger);
		}
		bind();
	};
	const badNumbers: PointColumns['badNumbers'] = [];
	const badRows: PointColumns['badRows'] = [];
	let badRowCount = 0;
	/** One reason a row is enough. */
	const spoil = (why: PointColumns['badRows'][number]['why'], at: number, wasBad: boolean): true => {
		if (!wasBad && ++badRowCount <= mostBad) badRows.push({ row: at, why });
		return true;
	};
	let index = 0;
	let rowNumber = 0;
	let at = 0;
	let skipHeader = reading.hasHeader;
	let isCut = false;

	while (at < size) {
		rowNumber++;
		const lineStart = at;
		// A header and lines of nothing but blanks and delimiters are passed over.
		let peek = at;
		while (peek < size && (bytes[peek] === BLANK || bytes[peek] === TAB || bytes[peek] === delimiter)) peek++;
		const isBlank = peek >= size || bytes[peek] === LF || bytes[peek] === CR;
		if (isBlank || skipHeader) {
			if (!isBlank) skipHeader = false;
			at = isBlank ? afterLineEnd(bytes, peek) : endOfRecord(bytes, at);
			continue;
		}
		if (index >= pointTableLimits.rows) {
			isCut = true;
			break;
		}
		if (index >= capacity) grow();
		for (let k = 0; k < numberColumns.length; k++) numberColumns[k]![index] = Number.NaN;
		let cell = 0;
		let isBad = false;
		let isEnd = false;
		let hasControl = false;
		while (!isEnd) {
			while (at < size && (bytes[at] === BLANK || (bytes[at] === TAB && delimiter !== TAB))) at++;
			let start = at;
			let end = at;
			const numberColumn = cell < width ? numberAt[cell]! : null;
			if (bytes[at] === QUOTE) {
				at++;
				while (at < size && at - lineStart <= pointTableLimits.lineLength) {
					if (bytes[at] === QUOTE) {
						if (bytes[at + 1] !== QUOTE) break;
						at++;
					}
					at++;
				}
				if (at >= size || bytes[at] !== QUOTE) {
					isBad = spoil('quote', rowNumber, isBad);
					// A line end inside the open quote belongs to the next row again.
					at = start + 1;
				} else at++;
				end = at;
				while (at < size && bytes[at] !== delimiter && bytes[at] !== LF && bytes[at] !== CR) at++;
			} else if (numberColumn !== null) {
				// Whole and fraction in 32-bit integers of at most nine digits each: twice as fast as one long product of doubles.
				let whole = 0;
				let fraction = 0;
				let decimals = 0;
				const sign = bytes[at] === 45 ? -1 : 1;
				if (bytes[at] === 45 || bytes[at] === 43) at++;
				const first = at;
				let byte = at < size ? bytes[at]! : LF;
				let digit = byte - 48;
				while (digit >= 0 && digit <= 9 && at - first < 9) {
					whole = (whole * 10 + digit) | 0;
					byte = ++at < size ? bytes[at]! : LF;
					digit = byte - 48;
				}
				let digits = at - first;
				if (byte === mark && byte !== delimiter) {
					byte = ++at < size ? bytes[at]! : LF;
					const firstDecimal = at;
					digit = byte - 48;
					while (digit >= 0 && digit <= 9 && at - firstDecimal < 9) {
						fraction = (fraction * 10 + digit) | 0;
						byte = ++at < size ? bytes[at]! : LF;
						digit = byte - 48;
					}
					decimals = at - firstDecimal;
					digits += decimals;
				}
				if (digits > 0 && digits < 16 && (byte === delimiter || byte === LF || byte === CR)) {
					numberColumn[index] = sign * scaledDecimal(whole, fraction, decimals);
					end = at;
					start = end;
				} else {
					while (at < size && bytes[at] !== delimiter && bytes[at] !== LF && bytes[at] !== CR) at++;
					end = at;
				}
			} else {
				let byte = at < size ? bytes[at]! : LF;
				while (stops[byte] !== 1) {
					if (stops[byte] === 2) hasControl = true;
					byte = ++at < size ? bytes[at]! : LF;
				}
				end = at;
			}
			if (cell < width && end > start) {
				while (end > start && (bytes[end - 1] === BLANK || bytes[end - 1] === TAB)) end--;
				const textColumn = textAt[cell]!;
				if (textColumn !== null) {
					textColumn[2 * index] = start;
					textColumn[2 * index + 1] = end;
				} else if (numberColumn !== null && end > start) readSlowly(index, start, end, fieldAt[cell]!, numberColumn);
			}
			if (headerCells > 0 && cell >= headerCells && end > start) isBad = spoil('many-cells', rowNumber, isBad);
			cell++;
			if (isBlankDelimited) while (bytes[at] === BLANK && bytes[at + 1] === BLANK) at++;
			if (at >= size || bytes[at] === LF || bytes[at] === CR) {
				isEnd = true;
				// Blanks before the line end are no further cell.
			} else at++;
		}
		if (at - lineStart > pointTableLimits.lineLength) {
			isBad = spoil('too-long', rowNumber, isBad);
		}
		if (hasControl) {
			isBad = spoil('control', rowNumber, isBad);
		}
		if (isBad) forgetRow(index);
		else row[index++] = rowNumber;
		at = afterLineEnd(bytes, at);
	}
	return { count: index, row, numbers, texts, badNumbers, badRows, badRowCount, isCut };

	function readSlowly(index: number, start: number, end: number, field: PointField, column: Float64Array): void {
		const cellText = unquote(text.decode(start, end)).trim();
		if (cellText === '') return;
		const value = parseDecimal(cellText, reading.decimalMark);
		if (value !== null && Number.isFinite(value)) column[index] = value;
		else if (badNumbers.length < mostBad) badNumbers.push({ index, field, start, end, isNotFinite: value !== null });
	}
	/** The slot is used again by the next row. */
	function forgetRow(index: number): void {
		while (badNumbers.length > 0 && badNumbers.at(-1)!.index === index) badNumbers.pop();
		for (const column of texts.values()) column[2 * index] = column[2 * index + 1] = 0;
	}
}

/** The text of a cell without its quotes. */
export function unquote(cell: string): string {
	return cell.length >= 2 && cell.startsWith('"') && cell.endsWith('"') ? cell.slice(1, -1).replaceAll('""', '"') : cell;
}

/** How many bytes a row takes, by the first of them: so much memory is asked for, and more if it was too little. */
function rowLength(bytes: Uint8Array): number {
	const looked = Math.min(bytes.length, 20_000);
	let lines = 1;
	for (let i = 0; i < looked; i++) if (bytes[i] === LF) lines++;
	return Math.max(2, looked / lines);
}

function afterLineEnd(bytes: Uint8Array, at: number): number {
	if (bytes[at] === CR && bytes[at + 1] === LF) return at + 2;
	return at + 1;
}

/** The end of the record that starts here, its line end included; quotes may hold line ends. */
export function endOfRecord(bytes: Uint8Array, start: number): number {
	let at = start;
	let isQuoted = false;
	while (at < bytes.length && at - start <= pointTableLimits.lineLength) {
		const byte = bytes[at]!;
		if (byte === QUOTE) isQuoted = !isQuoted;
		else if (!isQuoted && (byte === LF || byte === CR)) return afterLineEnd(bytes, at);
		at++;
	}
	at = start;
	while (at < bytes.length && bytes[at] !== LF && bytes[at] !== CR) at++;
	return afterLineEnd(bytes, at);
}
