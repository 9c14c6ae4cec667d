import type { Finding } from '../fit/fit-schema.ts';
import { parseDecimal } from './decimal-number.ts';
import { fieldOfHeader, foldHeader } from './point-headers.ts';
import type { LengthUnit, PointField, PointTableReading } from './point-table-schema.ts';
import { endOfRecord } from './scan-points.ts';
import { splitRecord } from './split-record.ts';
import { detectEncoding, pointTableLimits, scannableText, whyNoTable } from './table-bytes.ts';

export interface InspectedColumn {
	/** Counted from 0. */
	readonly index: number;
	readonly header: string | null;
	/** The first three rows' cells. */
	readonly samples: readonly string[];
	readonly isNumeric: boolean;
	/** What it is proposed to be; null: nothing, or to be said by a person. */
	readonly field: PointField | null;
}

/** One way to read a file that can be read in two, with its first rows as they would come out. */
export interface OrderReading {
	readonly order: 'PENZD' | 'PNEZD';
	readonly columns: PointTableReading['columns'];
	readonly rows: readonly { name: string; easting: number; northing: number; height: number }[];
}

export interface PointTableInspection {
	readonly encoding: PointTableReading['encoding'];
	readonly delimiter: PointTableReading['delimiter'];
	readonly decimalMark: PointTableReading['decimalMark'];
	readonly hasHeader: boolean;
	readonly columns: readonly InspectedColumn[];
	/** As far as the file tells; complete where `needs` is empty. */
	readonly proposed: PointTableReading['columns'];
	/** What only a person can say. order: easting or northing first. columns: which column is what. */
	readonly needs: readonly ('order' | 'columns')[];
	/** Both readings, where the order must be asked. */
	readonly orders: readonly OrderReading[];
	/** Coordinates without a column; control may do without plan or height. */
	readonly missing: readonly PointField[];
	/** What headers or figures suggest; the caller decides. */
	readonly suggestedUnit: LengthUnit | null;
	readonly findings: readonly Finding[];
}

/** A file that is no table, with the reason as a sentence. */
export interface PointTableRefusal {
	readonly refused: string;
}

const sampleRows = 60;
const delimiters = ['\t', ';', ',', ' '] as const;

/** The first records that hold something, undivided. */
function firstLines(bytes: Uint8Array, decode: (start: number, end: number) => string): string[] {
	const lines: string[] = [];
	for (let at = 0; at < bytes.length && lines.length < sampleRows; ) {
		const end = endOfRecord(bytes, at);
		const line = decode(at, Math.min(end, at + pointTableLimits.lineLength)).replace(/[\r\n]+$/, '');
		if (line.trim() !== '' && !/^[\s,;]*$/.test(line)) lines.push(line);
		at = end;
	}
	return lines;
}

interface Division {
	readonly delimiter: PointTableReading['delimiter'];
	readonly decimalMark: PointTableReading['decimalMark'];
	readonly cells: string[][];
	readonly numeric: boolean[];
	readonly score: number;
}

/** Cuts the lines one way and counts the columns in which nine of ten cells below the first row are numbers. */
function divide(lines: readonly string[], delimiter: Division['delimiter'], decimalMark: Division['decimalMark']): Division {
	const cells = lines.map((line) => splitRecord(line, delimiter));
	const width = Math.max(...cells.map((row) => row.length));
	const data = cells.length > 1 ? cells.slice(1) : cells;
	const numeric = Array.from({ length: Math.min(width, pointTableLimits.columns) }, (_, column) => {
		const filled = data.map((row) => row[column] ?? '').filter((cell) => cell !== '');
		return filled.length > 0 && filled.filter((cell) => parseDecimal(cell, decimalMark) !== null).length >= 0.9 * filled.length;
	});
	const common = new Map<number, number>();
	for (const row of cells) common.set(row.length, (common.get(row.length) ?? 0) + 1);
	const evenness = Math.max(...common.values()) / cells.length;
	// Three columns of numbers are what a point list has; more of them say less than that the rows are even.
	const score = Math.min(3, numeric.filter(Boolean).length) * 10 + (width > 1 ? 5 * evenness : 0) + fractions(data, numeric, decimalMark);
	return { delimiter, decimalMark, cells, numeric, score };
}

/** Numbers with decimals under a mark speak for that mark; whole numbers for none. */
function fractions(rows: readonly string[][], numeric: readonly boolean[], mark: string): number {
	const withMark = rows.some((row) => row.some((cell, column) => numeric[column] === true && cell.includes(mark)));
	return withMark ? 2 : 0;
}

function bestDivision(lines: readonly string[]): Division {
	let best: Division | null = null;
	for (const delimiter of delimiters) {
		for (const mark of ['.', ','] as const) {
			if (delimiter === mark && !lines.some((line) => line.includes('"'))) continue;
			const division = divide(lines, delimiter, mark);
			if (best === null || division.score > best.score + 1e-9) best = division;
		}
	}
	return best!;
}

/** A first row is a header where its cells in the number columns are no numbers, or where there is no other row and it names two fields. */
function isHeader(first: readonly string[], numeric: readonly boolean[], decimalMark: Division['decimalMark'], rowCount: number): boolean {
	const named = first.filter((cell) => fieldOfHeader(cell) !== null).length;
	if (rowCount === 1) return named >= 2;
	const inNumbers = first.filter((cell, column) => numeric[column] === true && cell !== '');
	return inNumbers.length > 0 ? !inNumbers.some((cell) => parseDecimal(cell, decimalMark) !== null) : named >= 1;
}

function columnsByHeader(header: readonly string[]): { columns: PointTableReading['columns']; twice: PointField[] } {
	const columns: PointTableReading['columns'] = {};
	const twice: PointField[] = [];
	header.forEach((cell, index) => {
		const field = fieldOfHeader(cell);
		if (field === null) return;
		if (columns[field] !== undefined) twice.push(field);
		else columns[field] = index;
	});
	for (const field of twice) delete columns[field];
	return { columns, twice };
}

/** Without a header: a name, three numbers and perhaps a code can be read with easting or with northing first; anything else is asked column by column. */
function ordersWithoutHeader({ cells, numeric, decimalMark }: Division): OrderReading[] {
	const [a, b, c] = [1, 2, 3];
	const others = numeric.slice(4);
	if (!(numeric[a] && numeric[b] && numeric[c]) || others.some(Boolean)) return [];
	const code: PointTableReading['columns'] = numeric.length === 5 ? { code: 4 } : {};
	return (['PENZD', 'PNEZD'] as const).map((order): OrderReading => {
		const [easting, northing] = order === 'PENZD' ? [a, b] : [b, a];
		const value = (row: readonly string[], column: number): number => parseDecimal(row[column] ?? '', decimalMark) ?? Number.NaN;
		return {
			order,
			columns: { name: 0, easting, northing, height: c, ...code },
			rows: cells
				.slice(0, 3)
				.filter((row) => [a, b, c].every((column) => Number.isFinite(value(row, column))))
				.map((row) => ({ name: row[0] ?? '', easting: value(row, easting), northing: value(row, northing), height: value(row, c) })),
		};
	});
}

/** The unit that headers name, or that figures without decimals over kilometres look like. Only said, never used. */
function suggestUnit(
	header: readonly string[],
	columns: PointTableReading['columns'],
	{ cells, numeric, decimalMark }: Division,
): { unit: LengthUnit; why: string } | null {
	const coordinates = (['easting', 'northing', 'height'] as const).flatMap((field) =>
		columns[field] === undefined ? [] : [columns[field]],
	);
	for (const column of coordinates) {
		const unit = header[column] === undefined ? null : foldHeader(header[column]).unit;
		if (unit !== null) return { unit, why: `the header says "${header[column]}"` };
	}
	const looked = coordinates.length > 0 ? coordinates : numeric.flatMap((is, column) => (is && column > 0 ? [column] : []));
	const data = cells.slice(header.length > 0 ? 1 : 0);
	const values = looked.map((column) => data.map((row) => parseDecimal(row[column] ?? '', decimalMark)).filter((value) => value !== null));
	const isCoarse =
		looked.length > 0 &&
		looked.every((column) => data.every((row) => new RegExp(`^[^${decimalMark}]*([${decimalMark}]\\d?0*)?$`).test(row[column] ?? '')));
	const spread = Math.max(0, ...values.map((list) => (list.length > 1 ? Math.max(...list) - Math.min(...list) : 0)));
	return isCoarse && spread > 2000 ? { unit: 'mm', why: 'the coordinates have at most one decimal and spread over thousands' } : null;
}

/**
 * Looks at a point file and proposes how to read it: encoding, delimiter, decimal mark, header, columns. What the file does not tell is asked,
 * never guessed: without a header easting and northing may come in either order (PENZD and PNEZD are both usual).
 */
export function inspectPointTable(bytes: Uint8Array): PointTableInspection | PointTableRefusal {
	const why = whyNoTable(bytes);
	if (why !== null) return { refused: why };
	const encoding = detectEncoding(bytes);
	const text = scannableText(bytes, encoding);
	const lines = firstLines(text.bytes, text.decode);
	if (lines.length === 0) return { refused: 'The file holds blank lines alone.' };
	if (lines.every((line) => line.includes('\u0000'))) return { refused: 'The file holds bytes that are no text.' };
	const division = bestDivision(lines);
	const { cells, numeric, delimiter, decimalMark } = division;
	const hasHeader = isHeader(cells[0]!, numeric, decimalMark, cells.length);
	const header = hasHeader ? cells[0]! : [];
	const { columns, twice } = columnsByHeader(header);
	const orders = hasHeader ? [] : ordersWithoutHeader(division);
	if (!hasHeader && orders.length > 0)
		Object.assign(columns, { name: 0, height: 3 }, orders[0]!.columns.code === undefined ? {} : { code: 4 });
	const missing = (['name', 'easting', 'northing', 'height'] as const).filter((field) => columns[field] === undefined);
	const needs: PointTableInspection['needs'] = orders.length > 0 ? ['order'] : missing.length > 0 || twice.length > 0 ? ['columns'] : [];
	const suggested = suggestUnit(header, columns, division);
	const findings: Finding[] = [];
	if (twice.length > 0)
		findings.push({
			code: 'column-twice',
			pairs: [],
			message: `Two columns look like ${twice.join(' and ')}; say which it is.`,
			evidence: { fields: twice },
		});
	if (suggested !== null && suggested.unit !== 'm') {
		findings.push({
			code: 'units',
			pairs: [],
			message: `The coordinates look like ${suggested.unit}: ${suggested.why}.`,
			evidence: { unit: suggested.unit },
		});
	}
	const fields = new Map(Object.entries(columns).map(([field, column]) => [column, field as PointField]));
	return {
		encoding,
		delimiter,
		decimalMark,
		hasHeader,
		columns: numeric.map((isNumeric, index) => ({
			index,
			header: hasHeader ? (header[index] ?? '') : null,
			samples: cells.slice(hasHeader ? 1 : 0, hasHeader ? 4 : 3).map((row) => (row[index] ?? '').slice(0, 60)),
			isNumeric,
			field: fields.get(index) ?? null,
		})),
		proposed: columns,
		needs,
		orders,
		missing,
		suggestedUnit: suggested?.unit ?? null,
		findings,
	};
}
