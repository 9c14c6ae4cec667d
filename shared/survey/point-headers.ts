import type { LengthUnit, PointField } from './point-table-schema.ts';

/** Headers as instruments and offices write them, folded to letters and digits, without their unit. */
const headersByField: Readonly<Record<PointField, readonly string[]>> = {
	name: [
		'name',
		'point',
		'pointname',
		'pointid',
		'pointno',
		'pointnumber',
		'ptname',
		'ptid',
		'pt',
		'ptno',
		'id',
		'no',
		'nr',
		'number',
		'mark',
		'target',
		'punkt',
		'punktnr',
		'punktnummer',
	],
	easting: ['easting', 'eastings', 'east', 'e', 'x', 'xcoord', 'xcoordinate', 'coordx', 'rechtswert', 'ost'],
	northing: ['northing', 'northings', 'north', 'n', 'y', 'ycoord', 'ycoordinate', 'coordy', 'hochwert', 'nord'],
	height: [
		'height',
		'h',
		'z',
		'elevation',
		'elev',
		'el',
		'level',
		'rl',
		'reducedlevel',
		'orthogonalheight',
		'zcoord',
		'zcoordinate',
		'coordz',
		'hohe',
		'hoehe',
	],
	code: ['code', 'description', 'descr', 'desc', 'd', 'feature', 'featurecode', 'note', 'remark', 'kode'],
	setup: ['setup', 'station', 'stn', 'setupname', 'stationname', 'standpunkt', 'instrumentstation'],
	sigmaX: ['sigmax', 'sigmae', 'sigmaeast', 'sigmaeasting', 'sx', 'sdx', 'sde', 'stdx', 'stddevx', 'σx', 'σe'],
	sigmaY: ['sigmay', 'sigman', 'sigmanorth', 'sigmanorthing', 'sy', 'sdy', 'sdn', 'stdy', 'stddevy', 'σy', 'σn'],
	sigmaZ: ['sigmaz', 'sz', 'sdz', 'stdz', 'stddevz', 'σz'],
	sigmaPlan: ['sigmaplan', 'sigmaxy', 'sigmaen', 'sdplan', 'sdhz', 'sigmahz', 'σplan'],
	sigmaHeight: ['sigmaheight', 'sigmah', 'sdheight', 'sdh', 'sigmalevel', 'σheight', 'σh'],
	offsetMm: ['offsetmm', 'offset', 'prismoffset', 'prismoffsetmm'],
};

const fieldByHeader = new Map(
	Object.entries(headersByField).flatMap(([field, headers]) => headers.map((header) => [header, field as PointField] as const)),
);

/** "Height (m)" → "height" and m. */
export function foldHeader(header: string): { name: string; unit: LengthUnit | null } {
	const folded = header
		.toLowerCase()
		.normalize('NFD')
		.replace(/[\u0300-\u036f]/g, '');
	const unit = /[[(_ ]\s*(mm|m|ftus|usft|us-ft|us ft|ft|feet|metres?|meters?)\s*[\])]?\s*$/.exec(folded);
	const stem = unit === null ? folded : folded.slice(0, unit.index);
	const name = stem.replace(/[^a-z0-9σ]/g, '');
	if (unit === null || name === '') return { name: folded.replace(/[^a-z0-9σ]/g, ''), unit: null };
	const word = unit[1]!;
	return { name, unit: word === 'mm' ? 'mm' : word.includes('us') ? 'ftUS' : word.startsWith('f') ? 'ft' : 'm' };
}

/** What a header says its column is; null where it says nothing known. */
export function fieldOfHeader(header: string): PointField | null {
	const { name, unit } = foldHeader(header);
	const field = fieldByHeader.get(name) ?? null;
	// An offset in anything but millimetres is not what the field means.
	return field === 'offsetMm' && unit !== null && unit !== 'mm' ? null : field;
}
