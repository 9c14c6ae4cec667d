import type { Finding } from '../fit/fit-schema.ts';
import { toMetres } from './length-units.ts';
import type { PointField, PointTableReading, RowFault } from './point-table-schema.ts';
import { cleanText, whyNoName } from './point-text.ts';
import { endOfRecord, type PointColumns, scanPoints, unquote } from './scan-points.ts';
import { splitRecord } from './split-record.ts';
import { pointTableLimits, scannableText, whyNoTable } from './table-bytes.ts';

/** One row of a point file. Metres, in the file's axes: easting/x, northing/y, height/z. */
export interface PointRow {
	/** As a spreadsheet counts it: from 1, header and blank rows included. */
	readonly row: number;
	readonly name: string;
	readonly xyzM: readonly [number | null, number | null, number | null];
	/** Standard deviations along the axes; null where the row gives none. An axis without coordinate has none. */
	readonly sigmaM: readonly [number | null, number | null, number | null] | null;
	readonly code: string;
	/** "" where the file has no set-up column. */
	readonly setup: string;
	/** null where the file does not say; never taken for 0 here. */
	readonly offsetMm: number | null;
}

export interface PointTable {
	readonly rows: PointRow[];
	/** At most 500; `faultCount` has them all. */
	readonly faults: RowFault[];
	readonly faultCount: number;
	/** Rows that hold something, whether they could be read or not. */
	readonly rowCount: number;
	readonly findings: Finding[];
}

export interface PointTableDemands {
	/** Control may lack plan or height; a survey's points have all three. */
	readonly mayLackCoordinates?: boolean;
	/** A level run's file has heights alone; one that has any plan column has all three. */
	readonly mayBeHeights?: boolean;
}

/** True where a file is read for heights alone, as a level run brings them. */
export function hasHeightsAlone({ columns }: Pick<PointTableReading, 'columns'>): boolean {
	return columns.height !== undefined && columns.easting === undefined && columns.northing === undefined;
}

const mostFaults = 500;
/** The three coordinates, in the order of `xyzM`. */
const coordinateFields = ['easting', 'northing', 'height'] as const;
const farM = 1e8;

/** How a field is called in a sentence. */
const fieldWords: Readonly<Record<PointField, string>> = {
	name: 'name',
	easting: 'easting',
	northing: 'northing',
	height: 'height',
	code: 'code',
	setup: 'set-up',
	sigmaX: 'sigma x',
	sigmaY: 'sigma y',
	sigmaZ: 'sigma z',
	sigmaPlan: 'sigma plan',
	sigmaHeight: 'sigma height',
	offsetMm: 'offset',
};

/** The refusal of a whole file, as the one fault of row 0. */
function refused(message: string): PointTable {
	return { rows: [], faults: [{ row: 0, column: null, value: null, message }], faultCount: 1, rowCount: 0, findings: [] };
}

/**
 * Reads a point file as it was said to be read. Rows that cannot be stored are left out and each is a fault with a sentence:
 * "Row 14: northing 'N/A' is not a number." Coordinates and σ in the unit given, offsets in millimetres.
 */
export function readPointTable(bytes: Uint8Array, reading: PointTableReading, demands: PointTableDemands = {}): PointTable {
	const why = whyNoTable(bytes);
	if (why !== null) return refused(why);
	const isRun = demands.mayBeHeights === true && hasHeightsAlone(reading);
	const missing = ['name', ...(demands.mayLackCoordinates || isRun ? [] : coordinateFields)].filter(
		(field) => reading.columns[field as PointField] === undefined,
	);
	if (missing.length > 0) return refused(`No column is named for ${missing.map((field) => fieldWords[field as PointField]).join(', ')}.`);
	const used = Object.values(reading.columns);
	if (new Set(used).size !== used.length) return refused('One column is named for two things.');
	const text = scannableText(bytes, reading.encoding);
	const header = reading.hasHeader ? headerOf(text, reading) : [];
	const columns = scanPoints(text, reading, reading.delimiter === ' ' ? 0 : header.length);
	if (columns.isCut) return refused(`The file has more than ${pointTableLimits.rows.toLocaleString('en')} rows; at most so many are read.`);
	return new RowReader(columns, reading, text.decode, isRun ? { mayLackCoordinates: true } : demands, header).read();
}

/** The cells of the first row that holds something. */
function headerOf(text: ReturnType<typeof scannableText>, reading: PointTableReading): string[] {
	const { bytes } = text;
	let at = 0;
	while (at < bytes.length) {
		const end = endOfRecord(bytes, at);
		const line = text.decode(at, end).trim();
		if (line !== '') return splitRecord(line, reading.delimiter);
		at = end;
	}
	return [];
}

/** Makes rows and faults of the scanned columns of one file. */
class RowReader {
	private readonly faults: RowFault[] = [];
	private faultCount = 0;
	private readonly cleaned: string[] = [];
	private readonly columns: PointColumns;
	private readonly reading: PointTableReading;
	private readonly decode: (start: number, end: number) => string;
	private readonly demands: PointTableDemands;
	private readonly header: readonly string[];
	private readonly hasSigma: boolean;

	constructor(
		columns: PointColumns,
		reading: PointTableReading,
		decode: (start: number, end: number) => string,
		demands: PointTableDemands,
		header: readonly string[],
	) {
		this.columns = columns;
		this.reading = reading;
		this.decode = decode;
		this.demands = demands;
		this.header = header;
		this.hasSigma = (['sigmaX', 'sigmaY', 'sigmaZ', 'sigmaPlan', 'sigmaHeight'] as const).some(
			(field) => reading.columns[field] !== undefined,
		);
	}

	read(): PointTable {
		const { columns } = this;
		this.badRows();
		const bad = this.badNumbers();
		const rows: PointRow[] = [];
		for (let index = 0; index < columns.count; index++) {
			if (bad.has(index)) continue;
			const row = this.row(index);
			if (row !== null) rows.push(row);
		}
		this.faults.sort((a, b) => a.row - b.row);
		const findings: Finding[] =
			this.cleaned.length === 0
				? []
				: [
						{
							code: 'names-cleaned',
							pairs: this.cleaned.slice(0, 200),
							message: `${this.cleaned.length === 1 ? 'One name or code held' : `${this.cleaned.length} names or codes held`} invisible or direction-turning characters, which were taken out.`,
							evidence: { count: this.cleaned.length },
						},
					];
		return { rows, faults: this.faults, faultCount: this.faultCount, rowCount: columns.count + columns.badRowCount, findings };
	}

	private fault(row: number, column: PointField | null, value: string | null, message: string): void {
		this.faultCount++;
		if (this.faults.length < mostFaults)
			this.faults.push({ row, column, value: value === null ? null : shortened(value), message: `Row ${row}: ${message}` });
	}

	private badRows(): void {
		for (const { row, why } of this.columns.badRows) {
			if (why === 'too-long')
				this.fault(row, null, null, `it is longer than ${pointTableLimits.lineLength.toLocaleString('en')} characters.`);
			else if (why === 'quote') this.fault(row, null, null, 'a quote is opened and never closed.');
			else if (why === 'control') this.fault(row, null, null, 'it holds control characters.');
			else this.fault(row, null, null, `it has more cells than the header, which has ${this.header.length}.`);
		}
	}

	/** Faults of cells that are no numbers; a header repeated inside the file is one fault, not one for each cell. */
	private badNumbers(): Set<number> {
		const bad = new Set<number>();
		const headerRows = new Set<number>();
		for (const { index, field, start, end, isNotFinite } of this.columns.badNumbers) {
			bad.add(index);
			const row = this.columns.row[index]!;
			const value = unquote(this.decode(start, end)).trim();
			if (headerRows.has(index)) continue;
			if (this.header.length > 0 && value.toLowerCase() === this.header[this.reading.columns[field]!]?.toLowerCase()) {
				headerRows.add(index);
				this.fault(row, null, null, 'it repeats the header.');
				continue;
			}
			this.fault(
				row,
				field,
				value,
				`${fieldWords[field]} '${shortened(value)}' ${isNotFinite ? 'is not a finite number' : 'is not a number'}.`,
			);
		}
		return bad;
	}

	/** Codes and set-ups are few and repeated: each is cleaned and kept once. */
	private readonly known = new Map<string, string>();

	private text(field: PointField, index: number): string {
		const spans = this.columns.texts.get(field);
		if (spans === undefined || spans[2 * index] === spans[2 * index + 1]) return '';
		const raw = unquote(this.decode(spans[2 * index]!, spans[2 * index + 1]!));
		const isRepeated = field !== 'name';
		const same = isRepeated ? this.known.get(raw) : undefined;
		if (same !== undefined) return same;
		const { text, wasCleaned } = cleanText(raw);
		if (wasCleaned) this.cleaned.push(text);
		else if (isRepeated && this.known.size < 1000) this.known.set(raw, text);
		return text;
	}

	private value(field: PointField, index: number): number | null {
		const value = this.columns.numbers.get(field)?.[index];
		return value === undefined || Number.isNaN(value) ? null : value;
	}

	private row(index: number): PointRow | null {
		const row = this.columns.row[index]!;
		const name = this.text('name', index);
		const why = whyNoName(name);
		if (why !== null) {
			this.fault(row, 'name', name === '' ? null : name, why);
			return null;
		}
		const code = this.text('code', index);
		const setup = this.text('setup', index);
		if (code.length > 200 || setup.length > 40) {
			this.fault(
				row,
				code.length > 200 ? 'code' : 'setup',
				null,
				`its ${code.length > 200 ? 'code has over 200' : 'set-up has over 40'} characters.`,
			);
			return null;
		}
		const { unit } = this.reading;
		const xyzM: [number | null, number | null, number | null] = [null, null, null];
		for (let axis = 0; axis < 3; axis++) {
			const given = this.value(coordinateFields[axis]!, index);
			if (given === null) continue;
			const valueM = toMetres(given, unit);
			if (Math.abs(valueM) > farM) {
				this.fault(row, coordinateFields[axis]!, String(given), `${coordinateFields[axis]} ${given} is further than any place on Earth.`);
				return null;
			}
			xyzM[axis] = valueM;
		}
		const lacking = this.lacking(xyzM);
		if (lacking !== null) {
			this.fault(row, lacking, null, `${name} has no ${lacking}.`);
			return null;
		}
		const sigmaM = this.hasSigma ? this.sigma(index, row, name, xyzM) : null;
		if (sigmaM === false) return null;
		return { row, name, xyzM, sigmaM, code, setup, offsetMm: this.value('offsetMm', index) };
	}

	/** The coordinate that is missing and may not be: half a plan position, or neither plan nor height. */
	private lacking([e, n, h]: PointRow['xyzM']): 'easting' | 'northing' | 'height' | null {
		if (e === null && (n !== null || !this.demands.mayLackCoordinates)) return 'easting';
		if (n === null && (e !== null || !this.demands.mayLackCoordinates)) return 'northing';
		return h === null && (e === null || !this.demands.mayLackCoordinates) ? 'height' : null;
	}

	private sigma(index: number, row: number, name: string, xyzM: PointRow['xyzM']): PointRow['sigmaM'] | false {
		const pairs = [
			['sigmaX', 'sigmaPlan'],
			['sigmaY', 'sigmaPlan'],
			['sigmaZ', 'sigmaHeight'],
		] as const;
		const sigmaM: [number | null, number | null, number | null] = [null, null, null];
		let given = 0;
		let wanted = 0;
		let lacking: PointField | null = null;
		for (let axis = 0; axis < 3; axis++) {
			const [own, shared] = pairs[axis]!;
			const field = this.reading.columns[own] === undefined ? shared : own;
			const value = this.value(field, index);
			if (value !== null && value < 0) {
				this.fault(row, field, String(value), `${fieldWords[field]} ${value} is negative.`);
				return false;
			}
			if (xyzM[axis] === null) continue;
			wanted++;
			if (value === null) lacking ??= field;
			else {
				given++;
				sigmaM[axis] = toMetres(value, this.reading.unit);
			}
		}
		if (given === 0) return null;
		if (given < wanted) {
			this.fault(row, lacking, null, `${name} has a σ for some axes and none for ${fieldWords[lacking!]}.`);
			return false;
		}
		return sigmaM;
	}
}

function shortened(value: string): string {
	return value.length <= 60 ? value : `${value.slice(0, 57)}…`;
}
