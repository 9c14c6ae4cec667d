import type { DerivedResult, Deviation } from './check-schema.ts';
import { derivedRow } from './derived/derived-row.ts';

export interface CsvElement {
	readonly mark: string;
	readonly title: string;
	readonly storey: string;
	readonly globalId: string;
}

const header = [
	'checkpoint',
	'element',
	'mark',
	'storey',
	'global_id',
	'characteristic',
	'place',
	'design_easting_m',
	'design_northing_m',
	'design_height_m',
	'measured_easting_m',
	'measured_northing_m',
	'measured_height_m',
	'deviation_mm',
	'offset_east_mm',
	'offset_north_mm',
	'uncertainty_mm',
	'lower_limit_mm',
	'upper_limit_mm',
	'beyond_mm',
	'verdict',
	'conformity',
	'rule',
	'point',
	'setup',
	'point_count',
	'not_measured_because',
];

/** A text cell: quoted where it must be, and never a formula to a spreadsheet (a leading = + - @, tab or return gets an apostrophe before it). */
function textCell(text: string): string {
	const guarded = /^[\s]*[=+\-@]|^[\t\r]/.test(text) ? `'${text}` : text;
	return /[",\r\n;]/.test(guarded) ? `"${guarded.replaceAll('"', '""')}"` : guarded;
}

function numberCell(value: number | null | undefined, decimals: number): string {
	if (value === null || value === undefined) return '';
	const text = value.toFixed(decimals);
	return Number(text) === 0 ? (0).toFixed(decimals) : text;
}

const elementCells = (element: CsvElement | undefined): string[] =>
	[element?.title, element?.mark, element?.storey, element?.globalId].map((text) => textCell(text ?? ''));

/**
 * A check as CSV (RFC 4180): one row for every checkpoint, then one for every derived result (its checkpoints named in the first cell), decimal points, units in the header, metres to three decimals. Design frame.
 * Text that a spreadsheet would take for a formula is made text.
 */
export function writeCheckCsv(
	deviations: readonly Deviation[],
	derived: readonly DerivedResult[],
	elementOf: (elementId: string) => CsvElement | undefined,
	setupNameOf: (setupId: string) => string | undefined = () => undefined,
): string {
	const rows = deviations.map((deviation) => {
		const element = elementOf(deviation.elementId);
		return [
			textCell(deviation.checkpointId),
			...elementCells(element),
			deviation.characteristic,
			textCell(deviation.label),
			...deviation.place.map((value) => numberCell(value, 3)),
			...[0, 1, 2].map((axis) => numberCell(deviation.measured?.[axis], 3)),
			numberCell(deviation.deviationMm, 2),
			numberCell(deviation.offsetMm?.[0], 2),
			numberCell(deviation.offsetMm?.[1], 2),
			numberCell(deviation.expandedUncertaintyMm, 2),
			numberCell(deviation.limitsMm?.[0], 2),
			numberCell(deviation.limitsMm?.[1], 2),
			numberCell(deviation.beyondMm, 2),
			deviation.verdict,
			numberCell(deviation.conformity, 6),
			textCell(deviation.ruleId ?? ''),
			textCell(deviation.pointName ?? ''),
			textCell(deviation.setupId === null ? '' : (setupNameOf(deviation.setupId) ?? deviation.setupId)),
			String(deviation.pointCount),
			textCell(deviation.notMeasuredReason ?? ''),
		].join(',');
	});
	const derivedRows = derived.map((result, index) => {
		const element = elementOf(result.elementId);
		const row = derivedRow(result, index);
		return [
			textCell(result.from.join(' ')),
			...elementCells(element),
			result.characteristic,
			textCell(row.label),
			...Array<string>(6).fill(''),
			numberCell(result.deviationMm, 2),
			'',
			'',
			numberCell(result.uncertaintyMm, 2),
			numberCell(result.limitsMm?.[0], 2),
			numberCell(result.limitsMm?.[1], 2),
			numberCell(row.beyondMm, 2),
			result.verdict,
			numberCell(result.conformity, 6),
			textCell(result.ruleId),
			'',
			'',
			String(result.from.length),
			'',
		].join(',');
	});
	return `${[header.join(','), ...rows, ...derivedRows].join('\r\n')}\r\n`;
}
