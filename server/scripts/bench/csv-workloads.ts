import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { duplicateNames } from '#shared/survey/duplicate-names.ts';
import { inspectPointTable } from '#shared/survey/inspect-point-table.ts';
import type { PointTableReading } from '#shared/survey/point-table-schema.ts';
import { readPointTable } from '#shared/survey/read-point-table.ts';
import { scanPoints } from '#shared/survey/scan-points.ts';
import { scannableText } from '#shared/survey/table-bytes.ts';
import { seededPointList } from './seeded-input.ts';
import type { Program, Workload } from './workload.ts';

/** A point list from a file: name, three coordinates and code, the columns found by their header. */

const ROWS = 200_000;
const SEED = 6000;

/** Runs a program on the file as often as it takes to read so many rows, and removes it. The file is made before the clock starts. */
function onFile(rows: number, once: (path: string) => number): Program {
	const folder = mkdtempSync(join(tmpdir(), 'point-list-'));
	const path = join(folder, 'points.csv');
	writeFileSync(path, seededPointList(SEED, rows));
	process.on('exit', () => rmSync(folder, { recursive: true, force: true }));
	return (units) => {
		const passes = Math.max(1, Math.round(units / rows));
		let check = 0;
		for (let pass = 0; pass < passes; pass++) check = once(path);
		return { n: passes * rows, check: () => check };
	};
}

/** How the file's own header says it is to be read. */
function readingOf(bytes: Uint8Array): PointTableReading {
	const inspection = inspectPointTable(bytes);
	if ('refused' in inspection) throw new Error(inspection.refused);
	const { encoding, delimiter, decimalMark, hasHeader, proposed } = inspection;
	return { encoding, delimiter, decimalMark, hasHeader, unit: 'm', columns: proposed };
}

/** The sum of all coordinates. */
function readColumns(path: string): number {
	const bytes = readFileSync(path);
	const reading = readingOf(bytes);
	const { count, numbers, texts } = scanPoints(scannableText(bytes, reading.encoding), reading);
	if (!texts.has('name') || !texts.has('code')) return Number.NaN;
	const columns = ['easting', 'northing', 'height'].map((field) => numbers.get(field as 'easting')!);
	let sum = 0;
	for (let row = 0; row < count; row++) for (const column of columns) sum += column[row]!;
	return sum;
}

/** The same as rows with names, and how many names stand twice: none. */
function readRows(path: string): number {
	const bytes = readFileSync(path);
	const { rows } = readPointTable(bytes, readingOf(bytes));
	if (duplicateNames(rows).length > 0) return Number.NaN;
	let sum = 0;
	for (const { xyzM } of rows) sum += xyzM[0]! + xyzM[1]! + xyzM[2]!;
	return sum;
}

function countLineEnds(path: string): number {
	const bytes = readFileSync(path);
	let lines = 0;
	for (let at = 0; at < bytes.length; at++) if (bytes[at] === 10) lines++;
	return lines;
}

function pointList(name: string, once: (path: string) => number, goal: number): Workload {
	return {
		name,
		unit: 'rows',
		units: { product: 10 * ROWS, yardstick: 10 * ROWS },
		goal,
		// A unit is a row, whatever the size of the file; more rows than this are not read in one file.
		growth: 1,
		expected: { value: 1164830031278.22, within: 0.02 },
		product: (times) => onFile(times === 1 ? ROWS : Math.floor(1.2 * ROWS), once),
		yardstick: (times) => onFile(times === 1 ? ROWS : Math.floor(1.2 * ROWS), countLineEnds),
	};
}

export const csvWorkloads: readonly Workload[] = [pointList('csv', readColumns, 2), pointList('csv-duplicates', readRows, 5)];
