import type { PointTableInspection } from '#shared/survey/inspect-point-table.ts';
import type { LengthUnit, PointField, PointTableReading } from '#shared/survey/point-table-schema.ts';
import { hasHeightsAlone } from '#shared/survey/read-point-table.ts';

/** What a person sees of each field, for the heads of columns. */
export const fieldWords: Record<PointField, string> = {
	name: 'point name',
	easting: 'easting or x',
	northing: 'northing or y',
	height: 'height or z',
	code: 'code',
	setup: 'set-up',
	sigmaX: 'σ of x',
	sigmaY: 'σ of y',
	sigmaZ: 'σ of z',
	sigmaPlan: 'σ plan',
	sigmaHeight: 'σ height',
	offsetMm: 'offset, mm',
};

export const unitWords: Record<LengthUnit, string> = { m: 'metres', mm: 'millimetres', ft: 'feet, international', ftUS: 'feet, US survey' };

/** What has been said so far about how a file is to be read; unit and order null: not said yet. */
export interface ReadingWish {
	decimalMark: PointTableReading['decimalMark'];
	unit: LengthUnit | null;
	columns: PointTableReading['columns'];
	/** Only asked where a file without header can be read in two ways. */
	order: 'PENZD' | 'PNEZD' | null;
}

/** @param remembered the order said the last time; still shown and changeable */
export function firstWish(inspection: PointTableInspection, remembered: 'PENZD' | 'PNEZD' | null): ReadingWish {
	const wish: ReadingWish = {
		decimalMark: inspection.decimalMark,
		unit: inspection.suggestedUnit,
		columns: inspection.proposed,
		order: null,
	};
	return inspection.needs.includes('order') && remembered ? withOrder(inspection, wish, remembered) : wish;
}

export function withOrder(inspection: PointTableInspection, wish: ReadingWish, order: 'PENZD' | 'PNEZD'): ReadingWish {
	const reading = inspection.orders.find((candidate) => candidate.order === order);
	return reading ? { ...wish, order, columns: reading.columns } : wish;
}

/** Gives a column a field, and takes it from the column that had it. Null: the column is not used. */
export function withField(wish: ReadingWish, column: number, field: PointField | null): ReadingWish {
	const columns: PointTableReading['columns'] = {};
	for (const [name, index] of Object.entries(wish.columns)) if (index !== column && name !== field) columns[name as PointField] = index;
	if (field !== null) columns[field] = column;
	return { ...wish, columns };
}

/** The whole reading, or what is still to be said. */
export function readingOf(
	inspection: PointTableInspection,
	wish: ReadingWish,
	mayLackCoordinates: boolean,
): { reading: PointTableReading } | { missing: string } {
	if (inspection.needs.includes('order') && wish.order === null) return { missing: 'Say whether easting or northing comes first.' };
	const needed: PointField[] = mayLackCoordinates
		? ['name']
		: isLevelRun(inspection, wish)
			? ['name', 'height']
			: ['name', 'easting', 'northing', 'height'];
	const lacking = needed.filter((field) => wish.columns[field] === undefined);
	if (lacking.length > 0) return { missing: `Say which column is the ${lacking.map((field) => fieldWords[field]).join(', the ')}.` };
	if (wish.unit === null) return { missing: 'Say the unit of the coordinates.' };
	return {
		reading: {
			encoding: inspection.encoding,
			delimiter: inspection.delimiter,
			decimalMark: wish.decimalMark,
			hasHeader: inspection.hasHeader,
			unit: wish.unit,
			columns: wish.columns,
		},
	};
}

/** Heights alone, and no two columns of numbers left that could be plan. */
function isLevelRun({ columns }: PointTableInspection, wish: ReadingWish): boolean {
	const used = new Set(Object.values(wish.columns));
	return hasHeightsAlone(wish) && columns.filter(({ index, isNumeric }) => isNumeric && !used.has(index)).length < 2;
}

const delimiterWords: Record<PointTableReading['delimiter'], string> = { ',': 'commas', ';': 'semicolons', '\t': 'tabs', ' ': 'blanks' };

/** "Separated by semicolons, decimal comma, first row is a header." */
export function inspectionWords({ delimiter, hasHeader, encoding }: PointTableInspection, wish: ReadingWish): string {
	const mark = wish.decimalMark === '.' ? 'decimal point' : 'decimal comma';
	const text = encoding === 'utf-8' ? '' : `, text in ${encoding}`;
	return `Separated by ${delimiterWords[delimiter]}, ${mark}, ${hasHeader ? 'first row is a header' : 'no header'}${text}.`;
}
