import type { PointTableReading, RowFault } from '#shared/survey/point-table-schema.ts';
import { hasHeightsAlone, readPointTable } from '#shared/survey/read-point-table.ts';

/** A survey's points in columns, one slot a point: what a thread can hand over at once. Survey frame, metres. */
export interface SurveyColumns {
	row: Int32Array;
	/** Three a point. */
	xyzM: Float64Array;
	/** Three a point; NaN where the row gives none. */
	sigmaM: Float64Array;
	/** 0 where the file says nothing of an offset. */
	offsetMm: Float64Array;
	name: string[];
	code: string[];
	/** "1" where the file names none. */
	setup: string[];
}

export interface SurveyReading {
	points: SurveyColumns;
	rowCount: number;
	/** Any fault, and nothing is stored. */
	faults: RowFault[];
	faultCount: number;
}

/**
 * Survey points out of a point file, each with all three coordinates; of a level run, which has heights alone, with 0 in plan: its height fit
 * asks for none, and any other is refused for want of spread. The same name twice is a repeat, no fault.
 */
export function readSurvey(bytes: Uint8Array, reading: PointTableReading): SurveyReading {
	const { rows, faults, faultCount, rowCount } = readPointTable(bytes, reading, { mayBeHeights: true });
	const isRun = hasHeightsAlone(reading);
	const size = rows.length;
	const points: SurveyColumns = {
		row: new Int32Array(size),
		xyzM: new Float64Array(3 * size),
		sigmaM: new Float64Array(3 * size).fill(Number.NaN),
		offsetMm: new Float64Array(size),
		name: new Array<string>(size),
		code: new Array<string>(size),
		setup: new Array<string>(size),
	};
	for (const [index, row] of rows.entries()) {
		points.row[index] = row.row;
		for (let axis = 0; axis < 3; axis++) {
			points.xyzM[3 * index + axis] = row.xyzM[axis] ?? (isRun ? 0 : Number.NaN);
			points.sigmaM[3 * index + axis] = row.sigmaM?.[isRun ? 2 : axis] ?? Number.NaN;
		}
		points.offsetMm[index] = row.offsetMm ?? 0;
		points.name[index] = row.name;
		points.code[index] = row.code;
		points.setup[index] = row.setup === '' ? '1' : row.setup;
	}
	if (size > 0 || faultCount > 0) return { points, rowCount, faults, faultCount };
	const none = { row: 0, column: null, value: null, message: 'The file has no rows with points.' };
	return { points, rowCount, faults: [none], faultCount: 1 };
}

/** Why the file's set-ups are not those of the form, as a sentence; null where they are, the other way round too. */
export function whySetupsDiffer(inFile: readonly string[], inForm: readonly string[]): string | null {
	const twice = inForm.find((name, index) => inForm.indexOf(name) !== index);
	if (twice !== undefined) return `Set-up "${twice}" stands twice in the form.`;
	const file = [...new Set(inFile)];
	const notInForm = file.filter((name) => !inForm.includes(name));
	const notInFile = inForm.filter((name) => !file.includes(name));
	const parts = [
		...(notInForm.length > 0 ? [`the file has ${quoted(notInForm)}, which the form does not describe`] : []),
		...(notInFile.length > 0 ? [`the form describes ${quoted(notInFile)}, of which the file has no point`] : []),
	];
	return parts.length === 0 ? null : `The set-ups of the file and of the form differ: ${parts.join('; ')}.`;
}

function quoted(names: readonly string[]): string {
	const shown = names
		.slice(0, 5)
		.map((name) => `"${name}"`)
		.join(', ');
	return names.length > 5 ? `${shown} and ${names.length - 5} more` : shown;
}
