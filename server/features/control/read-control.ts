import type { z } from 'zod';
import type { controlPoint } from '#shared/control/contract.ts';
import { type MapFrame, partialMapToDesign } from '#shared/control/map-frame.ts';
import { duplicateNames } from '#shared/survey/duplicate-names.ts';
import type { PointTableReading, RowFault } from '#shared/survey/point-table-schema.ts';
import { type PointRow, readPointTable } from '#shared/survey/read-point-table.ts';

export type ReadControlPoint = Omit<z.infer<typeof controlPoint>, 'controlPointId'>;

export interface ControlReading {
	points: ReadControlPoint[];
	rowCount: number;
	/** Any fault, and nothing is stored. */
	faults: RowFault[];
	faultCount: number;
}

/**
 * Control points out of a point file: metres, in the file's frame and in the design's. A mark has one position, so a name that stands
 * twice is a fault. σ plan is the larger of two where a row gives two; `defaultSigmaM` stands in where a row gives none.
 * @param mapFrame where the file is in the map frame; null: it is in the design frame
 */
export function readControl(
	bytes: Uint8Array,
	reading: PointTableReading,
	mapFrame: MapFrame | null,
	defaultSigmaM: { plan: number; height: number } | null,
): ControlReading {
	const table = readPointTable(bytes, reading, { mayLackCoordinates: true });
	const repeated = duplicateNames(table.rows).flatMap(({ name, rows: [first, ...again] }): RowFault[] =>
		again.map((row) => ({
			row,
			column: 'name',
			value: name,
			message: `Row ${row}: ${name} stands in row ${first} already; a mark has one position.`,
		})),
	);
	const none: RowFault[] =
		table.rowCount === 0 && table.faultCount === 0
			? [{ row: 0, column: null, value: null, message: 'The file has no rows with points.' }]
			: [];
	const faults = [...table.faults, ...repeated, ...none].sort((one, other) => one.row - other.row);
	return {
		points: table.rows.map((row) => pointOf(row, mapFrame, defaultSigmaM)),
		rowCount: table.rowCount,
		faults,
		faultCount: table.faultCount + repeated.length + none.length,
	};
}

function pointOf(
	{ name, xyzM, sigmaM, code }: PointRow,
	mapFrame: MapFrame | null,
	defaultSigmaM: { plan: number; height: number } | null,
): ReadControlPoint {
	const designM = mapFrame === null ? xyzM : partialMapToDesign(mapFrame, xyzM);
	const scale = mapFrame?.scale ?? 1;
	const planM = sigmaM === null ? (defaultSigmaM?.plan ?? null) : largest(sigmaM[0], sigmaM[1]);
	const heightM = sigmaM === null ? (defaultSigmaM?.height ?? null) : sigmaM[2];
	return {
		name,
		givenM: [...xyzM],
		designM: [...designM],
		sigmaPlanM: xyzM[0] === null || planM === null ? null : planM / scale,
		sigmaHeightM: xyzM[2] === null || heightM === null ? null : heightM / scale,
		code,
	};
}

function largest(one: number | null, other: number | null): number | null {
	return one === null || other === null ? null : Math.max(one, other);
}
