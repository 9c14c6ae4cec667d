import { readFile, stat } from 'node:fs/promises';
import type { Finding } from '#shared/fit/fit-schema.ts';
import { inspectPointTable } from '#shared/survey/inspect-point-table.ts';
import type { LengthUnit, PointTableReading, RowFault } from '#shared/survey/point-table-schema.ts';
import { type PointRow, readPointTable } from '#shared/survey/read-point-table.ts';
import { pointTableLimits } from '#shared/survey/table-bytes.ts';
import { type ToleranceSheet, toleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { InputRefused } from './refusal.ts';

async function bytesOf(path: string): Promise<Uint8Array> {
	const found = await stat(path).catch(() => null);
	if (!found?.isFile()) throw new InputRefused('no-such-file', `There is no file ${path}.`, path);
	if (found.size > pointTableLimits.bytes) {
		const [has, most] = [found.size, pointTableLimits.bytes].map((bytes) => Math.round(bytes / 1024 / 1024));
		throw new InputRefused('bad-input', `${path} has ${has} MB; at most ${most} MB are read.`, path);
	}
	const bytes = await readFile(path).catch((error: NodeJS.ErrnoException) => error);
	if (bytes instanceof Uint8Array) return bytes;
	throw new InputRefused('bad-input', `The file ${path} cannot be read: ${bytes.code ?? bytes.message}.`, path);
}

/** Bytes and how they are to be read: by their header alone, since nobody is there to be asked. */
export interface OpenedTable {
	readonly path: string;
	readonly bytes: Uint8Array;
	readonly reading: PointTableReading;
	readonly findings: readonly Finding[];
}

/**
 * Opens a CSV with a header. `mayLack`: control may do without plan or height.
 * @throws InputRefused for what is no table, has no header, or names a needed column not at all or twice
 */
export async function openTable(path: string, unit: LengthUnit, mayLack: boolean): Promise<OpenedTable> {
	const bytes = await bytesOf(path);
	const seen = inspectPointTable(bytes);
	if ('refused' in seen) throw new InputRefused('bad-input', `${path}: ${seen.refused}`, path);
	if (!seen.hasHeader)
		throw new InputRefused('bad-input', `${path} has no header. Its first row must name the columns, such as name,x,y,z.`, path);
	const twice = seen.findings.find(({ code }) => code === 'column-twice');
	if (twice !== undefined) throw new InputRefused('bad-input', `${path}: ${twice.message}`, path);
	const hasPlan = !seen.missing.includes('easting') && !seen.missing.includes('northing');
	const mayDo = mayLack && (hasPlan || !seen.missing.includes('height'));
	const needed = seen.missing.filter((field) => field === 'name' || !mayDo);
	if (needed.length > 0) throw new InputRefused('bad-input', `${path}: no column is named for ${needed.join(', ')}.`, path);
	const { encoding, delimiter, decimalMark, hasHeader, proposed } = seen;
	const units = seen.findings.filter(({ code, evidence }) => code === 'units' && evidence.unit !== unit);
	return {
		path,
		bytes,
		reading: { encoding, delimiter, decimalMark, hasHeader, unit, columns: proposed },
		findings: units.map((finding) => ({
			...finding,
			message: `${path}: ${finding.message} It was read as ${unit}.`,
			evidence: { ...finding.evidence, file: path, readAs: unit },
		})),
	};
}

/** Refuses a file for its rows: the first faults in words, and how many more there are. A number that is none has its own code. */
export function refuseFaults(path: string, faults: readonly RowFault[], faultCount: number): void {
	const [first, ...others] = faults;
	if (first === undefined) return;
	const isNotFinite = /^[+-]?(nan|inf(inity)?|\d.*e\+?\d+)$/i.test(first.value?.trim() ?? '');
	const code = isNotFinite ? 'not-finite' : /is negative\.$/.test(first.message) ? 'bad-sigma' : 'bad-input';
	const shown = [first, ...others.slice(0, 2)].map(({ message }) => message).join(' ');
	const more = faultCount > 3 ? ` ${faultCount - 3} more rows are at fault.` : '';
	throw new InputRefused(code, `${path}: ${shown}${more}`, first.row > 0 ? `${path}:${first.row}` : path);
}

/** All rows of an opened table of targets or points; any fault refuses the file. */
export function rowsOf(table: OpenedTable): readonly PointRow[] {
	const { rows, faults, faultCount } = readPointTable(table.bytes, table.reading);
	refuseFaults(table.path, faults, faultCount);
	if (rows.length === 0) throw new InputRefused('bad-input', `${table.path} has no rows with points.`, table.path);
	return rows;
}

/** A tolerance sheet as CLI.md has it. @throws InputRefused, `where` the path inside the JSON */
export async function readSheet(path: string): Promise<ToleranceSheet> {
	const text = new TextDecoder().decode(await bytesOf(path));
	let value: unknown;
	try {
		value = JSON.parse(text);
	} catch {
		throw new InputRefused('bad-input', text.trim() === '' ? `${path} is empty.` : `${path} is not JSON.`, path);
	}
	const parsed = toleranceSheet.safeParse(value);
	if (parsed.success) return parsed.data;
	const issue = parsed.error.issues[0]!;
	const where = issue.path.map((part) => (typeof part === 'number' ? `[${part}]` : `.${String(part)}`)).join('');
	throw new InputRefused('bad-input', `${path}${where}: ${issue.message}.`, `${path}${where}`);
}
