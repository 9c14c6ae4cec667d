import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { parseDecimal } from '#shared/survey/decimal-number.ts';
import { duplicateNames } from '#shared/survey/duplicate-names.ts';
import { inspectPointTable, type PointTableInspection } from '#shared/survey/inspect-point-table.ts';
import { toMetres } from '#shared/survey/length-units.ts';
import type { PointTableReading } from '#shared/survey/point-table-schema.ts';
import { type PointTable, type PointTableDemands, readPointTable } from '#shared/survey/read-point-table.ts';
import { makePointList } from '../../fixtures/make-point-list.ts';

const fixture = (name: string): Uint8Array => new Uint8Array(readFileSync(new URL(`../../fixtures/csv/${name}`, import.meta.url)));
const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);
const inspect = (bytes: Uint8Array): PointTableInspection => {
	const inspected = inspectPointTable(bytes);
	if ('refused' in inspected) throw new Error(inspected.refused);
	return inspected;
};
/** Reads a file as it was proposed. */
const read = (bytes: Uint8Array, over: Partial<PointTableReading> = {}, demands: PointTableDemands = {}): PointTable => {
	const { encoding, delimiter, decimalMark, hasHeader, proposed } = inspect(bytes);
	return readPointTable(bytes, { encoding, delimiter, decimalMark, hasHeader, unit: 'm', columns: proposed, ...over }, demands);
};
const messages = (table: PointTable): string[] => table.faults.map(({ message }) => message);

const plain = [
	['P1', 100.001, 200.002, 10.003],
	['P2', 103.5, 204.25, 10.125],
	['P3', 96.75, 207.125, 9.875],
];
const figures = (table: PointTable) => table.rows.map(({ name, xyzM }) => [name, ...xyzM]);

describe('files that differ only in how they are written', () => {
	it.each([
		'plain.csv',
		'decimal-comma.csv',
		'tabs.csv',
		'byte-order-mark.csv',
		'crlf-no-last-line-end.csv',
		'old-mac-line-ends.csv',
		'utf-16le.csv',
	])('%s reads like the plain one', (name) => {
		const table = read(fixture(name));
		expect(figures(table)).toEqual(plain);
		expect(table.rows.map(({ row }) => row)).toEqual([2, 3, 4]);
		expect(table).toMatchObject({ faults: [], rowCount: 3 });
	});
	it('blank lines are passed over and still counted as rows', () => {
		expect(read(fixture('blank-lines.csv')).rows.map(({ name, row }) => [name, row])).toEqual([
			['P1', 4],
			['P2', 6],
		]);
	});
	it('columns aligned by blanks are a table without a header', () => {
		const bytes = fixture('columns-by-spaces.txt');
		const inspected = inspect(bytes);
		expect(inspected).toMatchObject({ delimiter: ' ', hasHeader: false, needs: ['order'] });
		expect(figures(read(bytes, { columns: inspected.orders[0]!.columns }))).toEqual(plain);
	});
	it('quoted cells keep commas, quotes and line ends', () => {
		const { rows } = read(fixture('quoted.csv'));
		expect(rows.map(({ name, code }) => [name, code])).toEqual([
			['P "1"', 'wall, north'],
			['P2', 'two lines'],
		]);
	});
	it('Windows-1252 is told from UTF-8', () => {
		expect(inspect(fixture('windows-1252.csv')).encoding).toBe('windows-1252');
		expect(read(fixture('windows-1252.csv')).rows.map(({ name }) => name)).toEqual(['Stütze 3', 'Fuß–A', 'P€']);
		expect(read(bytesOf('name;x;y;z\nStütze;1,5;2,5;3,5\n')).rows[0]).toMatchObject({ name: 'Stütze', xyzM: [1.5, 2.5, 3.5] });
	});
	it('columns are found by their headers, in any order', () => {
		expect(read(fixture('other-column-order.csv')).rows[0]).toMatchObject({ name: 'P1', xyzM: [100.001, 200.002, 10.003], code: 'COL' });
		const german = read(bytesOf('Punktnr.;Rechtswert;Hochwert;Höhe (m);Code\n1;3,5;4,5;5,5;COL\n'));
		expect(german.rows[0]).toMatchObject({ name: '1', xyzM: [3.5, 4.5, 5.5] });
		const full = 'Setup,Point ID,E,N,Elev.,Description,sigma_plan,sigma_height,offset_mm\nS1,9,1.25,2.5,3,FFL,0.002,0.001,18\n';
		expect(read(bytesOf(full)).rows[0]).toEqual({
			row: 2,
			name: '9',
			xyzM: [1.25, 2.5, 3],
			sigmaM: [0.002, 0.002, 0.001],
			code: 'FFL',
			setup: 'S1',
			offsetMm: 18,
		});
	});
	it('thousands are parted only where a decimal mark tells', () => {
		expect(read(fixture('decimal-comma-thousands.csv')).rows[0]!.xyzM).toEqual([512340.12, 218765.4, 31.2]);
		expect(parseDecimal('512.340', ',')).toBeNull();
		expect(parseDecimal('1.234.567,5', ',')).toBe(1234567.5);
		expect(parseDecimal('12.34,5', ',')).toBeNull();
	});
});

describe('what must be asked', () => {
	it.each(['penzd-no-header.csv', 'pnezd-no-header.csv'])('%s: both orders are shown, none is taken', (name) => {
		const inspected = inspect(fixture(name));
		expect(inspected.needs).toEqual(['order']);
		expect(inspected.proposed.easting).toBeUndefined();
		expect(inspected.orders.map(({ order }) => order)).toEqual(['PENZD', 'PNEZD']);
		const [penzd, pnezd] = inspected.orders;
		expect(penzd!.rows[0]).toMatchObject({ easting: pnezd!.rows[0]!.northing, northing: pnezd!.rows[0]!.easting });
		expect(penzd!.rows).toHaveLength(3);
		expect(penzd!.columns.code).toBe(4);
	});
	it('a column twice, a column lacking, columns without a known header', () => {
		expect(inspect(fixture('same-column-twice.csv'))).toMatchObject({ needs: ['columns'], findings: [{ code: 'column-twice' }] });
		expect(inspect(fixture('missing-columns.csv'))).toMatchObject({ needs: ['columns'], missing: ['height'] });
		expect(inspect(bytesOf('a;b;c;d\nP1;1;2;3\nP2;4;5;6\n'))).toMatchObject({
			hasHeader: true,
			needs: ['columns'],
			missing: ['name', 'easting', 'northing', 'height'],
		});
		expect(inspect(fixture('one-column.csv')).needs).toEqual(['columns']);
	});
	it('a unit is suggested, not used', () => {
		expect(inspect(fixture('millimetres.csv')).suggestedUnit).toBe('mm');
		expect(inspect(bytesOf('name,e_ft,n_ft,z_ft\nP1,1.5,2.5,3.5\n')).suggestedUnit).toBe('ft');
		expect(inspect(fixture('plain.csv')).suggestedUnit).toBeNull();
		expect(read(fixture('millimetres.csv')).rows[0]!.xyzM[0]).toBe(100001);
	});
});

describe('units', () => {
	it('millimetres and both feet come out as the same metres', () => {
		expect(read(fixture('millimetres.csv'), { unit: 'mm' }).rows[0]!.xyzM).toEqual([100.001, 200.002, 10.003]);
		const feet = read(fixture('us-survey-feet.csv'), { unit: 'ftUS' }).rows[0]!.xyzM;
		for (const axis of [0, 1, 2]) expect(feet[axis]).toBeCloseTo([100.001, 200.002, 10.003][axis]!, 3);
	});
	// International foot 0.3048 m exactly; US survey foot 1200/3937 m = 0.3048006096012192 m; they part by 2.0000039999690244 ppm.
	it('feet are exact', () => {
		expect(toMetres(1, 'ft')).toBe(0.3048);
		expect(toMetres(1, 'ftUS')).toBe(0.3048006096012192);
		expect(toMetres(3937, 'ftUS')).toBe(1200);
		expect((toMetres(1e6, 'ftUS') / toMetres(1e6, 'ft') - 1) * 1e6).toBeCloseTo(2.0000039999690244, 8);
	});
});

describe('rows that cannot be stored', () => {
	it.each<[string, string[], number]>([
		[
			'text-for-a-number.csv',
			[
				"Row 3: northing 'north' is not a number.",
				"Row 4: height '-' is not a number.",
				"Row 5: easting '12e' is not a number.",
				"Row 6: easting '0x10' is not a number.",
			],
			1,
		],
		[
			'not-finite.csv',
			[
				"Row 3: easting 'NaN' is not a number.",
				"Row 4: easting 'Infinity' is not a number.",
				"Row 5: easting '1e999' is not a finite number.",
			],
			1,
		],
		['empty-cells.csv', ['Row 2: P1 has no northing.', 'Row 3: it has no name.', 'Row 4: BM1 has no easting.'], 0],
		['rows-too-short-and-long.csv', ['Row 2: P1 has no height.', 'Row 3: it has more cells than the header, which has 4.'], 1],
		['header-twice.csv', ['Row 3: it repeats the header.'], 2],
		['negative-sigma.csv', ['Row 2: sigma z -0.001 is negative.', 'Row 3: P2 has a σ for some axes and none for sigma y.'], 0],
		['quote-never-closed.csv', ['Row 2: a quote is opened and never closed.'], 1],
		['nul-bytes.csv', ['Row 2: it holds control characters.'], 1],
		['long-line.csv', ['Row 2: it is longer than 10,000 characters.'], 1],
	])('%s', (name, want, good) => {
		const table = read(fixture(name));
		expect(messages(table)).toEqual(want);
		expect(table.rows).toHaveLength(good);
		expect(table.faultCount).toBe(want.length);
	});
	it('names that a spreadsheet would run are kept out, others stay as they are', () => {
		const table = read(fixture('formula-names.csv'));
		expect(messages(table)).toEqual([
			"Row 2: its name '=1+1' would be a formula in a spreadsheet.",
			"Row 3: its name '@SUM(A1)' would be a formula in a spreadsheet.",
		]);
		expect(table.rows.map(({ name }) => name)).toEqual(['<b>P3</b>', '__proto__']);
		expect(read(bytesOf('name,x,y,z\n+0.00,1,2,3\n')).rows[0]!.name).toBe('+0.00');
	});
	it('characters that are not seen are taken out with a finding', () => {
		const table = read(bytesOf('name,x,y,z,code\nC3\u202e-G\u200b,1,2,3,CO\ufeffL\n'));
		expect(table.rows[0]).toMatchObject({ name: 'C3-G', code: 'COL' });
		expect(table.findings).toMatchObject([{ code: 'names-cleaned', evidence: { count: 2 } }]);
	});
	it('control may lack plan or height, never half a plan', () => {
		const table = read(fixture('empty-cells.csv'), {}, { mayLackCoordinates: true });
		expect(table.rows).toMatchObject([{ name: 'BM1', xyzM: [null, null, 9.875] }]);
		expect(messages(table)).toEqual(['Row 2: P1 has no northing.', 'Row 3: it has no name.']);
		const bench = read(bytesOf('name,e,n,h,sigma_plan,sigma_height\nBM,,,5.5,,0.001\n'), {}, { mayLackCoordinates: true });
		expect(bench.rows[0]!.sigmaM).toEqual([null, null, 0.001]);
	});
	it('too long a name, too far a place', () => {
		expect(messages(read(bytesOf(`name,x,y,z\n${'n'.repeat(61)},1,2,3\nP2,1e12,2,3\n`)))).toEqual([
			'Row 2: its name has 61 characters; at most 60 are kept.',
			'Row 3: easting 1000000000000 is further than any place on Earth.',
		]);
	});
	it('whole files', () => {
		expect(inspectPointTable(fixture('empty.csv'))).toEqual({ refused: 'The file is empty.' });
		expect(inspectPointTable(fixture('zip-renamed.csv'))).toEqual({ refused: expect.stringContaining('ZIP') });
		expect(inspectPointTable(bytesOf('\n \n,,\n'))).toEqual({ refused: 'The file holds blank lines alone.' });
		expect(read(fixture('header-only.csv'))).toMatchObject({ rows: [], faults: [], rowCount: 0 });
		const reading: PointTableReading = {
			encoding: 'utf-8',
			delimiter: ',',
			decimalMark: '.',
			hasHeader: true,
			unit: 'm',
			columns: { name: 0, easting: 1, northing: 1, height: 2 },
		};
		expect(messages(readPointTable(bytesOf('a,b,c\n1,2,3\n'), reading))).toEqual(['One column is named for two things.']);
		expect(messages(readPointTable(bytesOf('a,b,c\n1,2,3\n'), { ...reading, columns: { easting: 0 } }))).toEqual([
			'No column is named for name, northing, height.',
		]);
		expect(
			messages(
				readPointTable(bytesOf('P,1,2,3\n'.repeat(250_001)), {
					...reading,
					hasHeader: false,
					columns: { name: 0, easting: 1, northing: 2, height: 3 },
				}),
			)[0],
		).toContain('more than 250,000 rows');
		expect(messages(readPointTable(new Uint8Array(32 * 1024 * 1024 + 1), reading))[0]).toContain('at most 32 MB');
	});
	it('at most 500 faults travel, all are counted', () => {
		const table = read(bytesOf(`name,x,y,z\nP,1,2,3\n${'P,a,b,c\n'.repeat(900)}P,1,2,3\n`), {
			columns: { name: 0, easting: 1, northing: 2, height: 3 },
			hasHeader: true,
			delimiter: ',',
			decimalMark: '.',
		});
		expect(table.faults).toHaveLength(500);
		expect(table.faultCount).toBeGreaterThan(500);
		expect(table.rowCount).toBe(902);
	});
});

describe('names that stand twice', () => {
	it('are found in any spelling, leading zeros kept apart', () => {
		expect(duplicateNames(read(fixture('duplicate-names.csv')).rows)).toEqual([{ name: 'P1', rows: [2, 4, 5] }]);
		expect(duplicateNames(read(fixture('leading-zeros.csv')).rows)).toEqual([]);
		expect(read(fixture('leading-zeros.csv')).rows.map(({ name }) => name)).toEqual(['007', '7', '00']);
	});
});

describe('any file', () => {
	const cell = fc.oneof(
		fc.string({ maxLength: 12 }),
		fc.double({ noNaN: true, min: -1e7, max: 1e7 }).map(String),
		fc.constantFrom('', '"', '""', '"a,b"', ' 12 ', '1,5', '\r', '\n', '\u202e', '=1'),
	);
	it('never throws, and every row is stored or at fault', () => {
		fc.assert(
			fc.property(
				fc.array(fc.array(cell, { maxLength: 7 }), { maxLength: 12 }),
				fc.constantFrom(',', ';', '\t', ' '),
				(rows, delimiter) => {
					const bytes = bytesOf(rows.map((row) => row.join(delimiter)).join('\n'));
					const inspected = inspectPointTable(bytes);
					if ('refused' in inspected) return;
					const table = readPointTable(bytes, {
						...inspected,
						unit: 'm',
						columns: { name: 0, easting: 1, northing: 2, height: 3, code: 4 },
					});
					expect(table.rows.length).toBeLessThanOrEqual(table.rowCount);
					for (const { xyzM } of table.rows) expect(xyzM.every((value) => value !== null && Number.isFinite(value))).toBe(true);
					if (table.faults[0]?.row !== 0) expect(table.rows.length + new Set(table.faults.map(({ row }) => row)).size).toBe(table.rowCount);
				},
			),
			{ numRuns: 300 },
		);
	});
	it('bytes of any kind never throw', () => {
		fc.assert(
			fc.property(fc.uint8Array({ maxLength: 300 }), (bytes) => {
				const inspected = inspectPointTable(bytes);
				if (!('refused' in inspected))
					readPointTable(bytes, { ...inspected, unit: 'm', columns: { name: 0, easting: 1, northing: 2, height: 3 } });
			}),
			{ numRuns: 500 },
		);
	});
	it('numbers come back to the last bit', () => {
		fc.assert(
			fc.property(fc.double({ min: -9e6, max: 9e6, noNaN: true }), fc.integer({ min: 0, max: 9 }), (value, decimals) => {
				for (const text of [value.toFixed(decimals), String(value)]) {
					const { rows } = readPointTable(bytesOf(`P,${text},0,0\n`), {
						encoding: 'utf-8',
						delimiter: ',',
						decimalMark: '.',
						hasHeader: false,
						unit: 'm',
						columns: { name: 0, easting: 1, northing: 2, height: 3 },
					});
					expect(rows[0]!.xyzM[0]! + 0).toBe(Number(text) + 0);
				}
			}),
			{ numRuns: 500 },
		);
	});
});

it('200 000 rows are read, to the known sum of all their numbers', () => {
	const bytes = bytesOf(makePointList(6000, 200_000));
	const { rows, faults } = read(bytes);
	expect(faults).toEqual([]);
	expect(rows).toHaveLength(200_000);
	let sum = 0;
	for (const { xyzM } of rows) sum += xyzM[0]! + xyzM[1]! + xyzM[2]!;
	expect(sum).toBeCloseTo(1164830031278.22, 1);
});
