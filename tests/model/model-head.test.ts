import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { runCheckpoints } from '#server/cli/checkpoints.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';
import { readFileHere } from './read-model-file.ts';

const file = (data: string, schema = 'IFC4'): Uint8Array =>
	new TextEncoder().encode(`ISO-10303-21;HEADER;FILE_SCHEMA(('${schema}'));ENDSEC;DATA;${data}ENDSEC;END-ISO-10303-21;`);
const project = (units: string): string => `#1=IFCPROJECT('0',$,'Site',$,$,$,$,$,#2);#2=IFCUNITASSIGNMENT((${units}));`;

function head(data: string, schema?: string) {
	const opened = readModelHead(file(data, schema));
	if (!opened.ok) throw new Error(`${opened.refusal.code}: ${opened.refusal.message}`);
	return opened.head;
}
const codes = (data: string): string[] => head(data).findings.map(({ code }) => code);

const metre = '#9=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);';
const millimetre = '#9=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);';

describe('the length unit', () => {
	it.each([
		['EXA', 1e18],
		['KILO', 1e3],
		['HECTO', 1e2],
		['DECA', 10],
		['DECI', 0.1],
		['CENTI', 0.01],
		['MILLI', 0.001],
		['MICRO', 1e-6],
		['ATTO', 1e-18],
	])('with the prefix %s is %d m', (prefix, metres) => {
		expect(head(`${project('#9')}#9=IFCSIUNIT(*,.LENGTHUNIT.,.${prefix}.,.METRE.);`).reading.metresPerUnit).toBe(metres);
	});

	it.each([
		["'FOOT',#10);#10=IFCMEASUREWITHUNIT(IFCLENGTHMEASURE(0.3048),#11)", 0.3048, 'foot'],
		["'inch',#10);#10=IFCMEASUREWITHUNIT(IFCRATIOMEASURE(25.4),#12)", 0.0254, 'inch'],
		["'US SURVEY FOOT',#10);#10=IFCMEASUREWITHUNIT(0.3048006096012192,#11)", 0.3048006096012192, 'US survey foot'],
	])('by conversion %s', (unit, metres, words) => {
		const { reading } = head(
			`${project('#13,#9')}#9=IFCCONVERSIONBASEDUNIT(#8,.LENGTHUNIT.,${unit};#11=IFCSIUNIT($,.LENGTHUNIT.,$,.METRE.);#12=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);#13=IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.);`,
		);
		expect(reading.metresPerUnit).toBeCloseTo(metres, 15);
		expect(reading.unit).toBe(words);
	});

	it('is never guessed, and contradictions are said', () => {
		const none = readModelHead(file("#1=IFCPROJECT('0',$,'Site',$,$,$,$,$,$);"));
		expect(none.ok ? 'read' : none.refusal.code).toBe('unknown-unit');
		const circle = readModelHead(file(`${project('#9')}#9=IFCCONVERSIONBASEDUNIT(#8,.LENGTHUNIT.,'X',#10);#10=IFCMEASUREWITHUNIT(2.,#9);`));
		expect(circle.ok ? 'read' : circle.refusal.code).toBe('unknown-unit');
		expect(codes(`${project('#9,#10')}${metre}#10=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);`)).toContain('unit-contradiction');
		expect(
			codes(
				`${project('#9')}${metre}#3=IFCPROJECT('1',$,'Other',$,$,$,$,$,#4);#4=IFCUNITASSIGNMENT((#10));#10=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);`,
			),
		).toEqual(['several-projects', 'unit-contradiction']);
	});
});

describe('a chosen reading', () => {
	const chosen = (data: string, metresPerUnit: number | null, mapScale: 'as-written' | 'by-units' | null = null) => {
		const opened = readModelHead(file(data), { metresPerUnit, mapScale, axes: [] });
		if (!opened.ok) throw new Error(opened.refusal.message);
		return opened.head;
	};
	const two = `${project('#9,#10')}${metre}#10=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);`;
	it('of the unit holds where the file names it among others, or names none, and nowhere else', () => {
		expect(chosen(two, 0.001).reading.metresPerUnit).toBe(0.001);
		expect(chosen(two, 0.3048).reading.metresPerUnit).toBe(1);
		expect(chosen(`${project('#9')}${metre}`, 0.001).reading.metresPerUnit).toBe(1);
		const none = chosen("#1=IFCPROJECT('0',$,'Site',$,$,$,$,$,$);", 0.3048);
		expect(none.reading).toMatchObject({ metresPerUnit: 0.3048, unit: 'foot' });
		expect(none.findings.map(({ code }) => code)).toEqual(['unit-chosen']);
	});
	it('of the scale holds where that contradicts the units, and nowhere else', () => {
		const map = (scale: string): string =>
			`${project('#9')}${millimetre}#20=IFCMAPCONVERSION(#21,#22,458657.3,5438232.25,113.7,0.27,0.96,${scale});#22=IFCPROJECTEDCRS('EPSG:25832',$,$,$,$,$,#23);#23=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);`;
		expect(chosen(map('$'), null, 'by-units').reading.mapConversion).toMatchObject({ scale: 0.001, chosenScale: 'by-units' });
		expect(chosen(map('$'), null, 'as-written').reading.mapConversion).toMatchObject({ scale: 1, chosenScale: 'as-written' });
		expect(chosen(map('0.0009996'), null, 'by-units').reading.mapConversion).toMatchObject({ scale: 0.0009996 });
		expect(chosen(map('0.0009996'), null, 'by-units').reading.mapConversion).not.toHaveProperty('chosenScale');
	});
	it.each([
		['0.00099962', '0.99962', '-380.0 ppm', '19.0 mm'],
		['0.0010000002', '1.0000002', '0.2 ppm', '0.0 mm'],
		['0.0010001234567', '1.0001235', '123.5 ppm', '6.2 mm'],
	])('of a scale factor %s is told as %s', (scale, factor, ppm, mm) => {
		const { findings } = chosen(
			`${project('#9')}${millimetre}#20=IFCMAPCONVERSION(#21,#22,458657.3,5438232.25,113.7,1.,0.,${scale});#22=IFCPROJECTEDCRS('EPSG:25832',$,$,$,$,$,#23);#23=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);`,
			null,
		);
		const { message } = findings.find(({ code }) => code === 'map-scale-factor')!;
		expect(message).toContain(`a scale factor of ${factor} beyond`);
		expect(message).toContain(`(${ppm})`);
		expect(message).toContain(`${mm} at 50 m`);
	});
});

describe('the map conversion', () => {
	const map = (scale: string, mapUnit: string, model = millimetre): string =>
		`${project('#9')}${model}#20=IFCMAPCONVERSION(#21,#22,458657.3,5438232.25,113.7,0.27,0.96,${scale});#22=IFCPROJECTEDCRS('EPSG:25832',$,$,$,$,$,${mapUnit});#23=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);`;

	it('contradicting the units is a finding with both readings', () => {
		const { findings, reading } = head(map('$', '#23'));
		expect(reading.mapConversion).toMatchObject({ scale: 1, mapUnitM: 1, crsName: 'EPSG:25832', eastings: 458657.3 });
		const finding = findings.find(({ code }) => code === 'map-scale')!;
		expect(finding.evidence).toEqual({
			asWritten: { scale: 1, mapMetresPerModelMetre: 1000 },
			byUnits: { scale: 0.001, mapMetresPerModelMetre: 1 },
		});
	});

	it.each([
		['0.001', '#23', []],
		['$', '$', []],
		['0.9996', '$', ['map-scale-factor']],
		['0.00099962', '#23', ['map-scale-factor']],
		['1.', '#23', ['map-scale']],
	])('with Scale %s and map unit %s says %j', (scale, unit, said) => {
		expect(codes(map(scale, unit))).toEqual(said);
	});

	it('is read from the property set that stands for it in IFC2x3', () => {
		const { reading } = head(
			`${project('#9')}${metre}#30=IFCPROPERTYSET('p',$,'ePset_MapConversion',$,(#31,#32,#33));#31=IFCPROPERTYSINGLEVALUE('Eastings',$,IFCLENGTHMEASURE(5000.5),$);#32=IFCPROPERTYSINGLEVALUE('Northings',$,IFCREAL(6000.25),$);#33=IFCPROPERTYSINGLEVALUE('OrthogonalHeight',$,IFCREAL(7.),$);`,
			'IFC2X3',
		);
		expect(reading.mapConversion).toMatchObject({ eastings: 5000.5, northings: 6000.25, orthogonalHeight: 7, scale: 1, mapUnitM: 1 });
	});
});

describe('placements and grids', () => {
	it('are followed through long chains, and circles end', () => {
		const steps = Array.from({ length: 30_000 }, (_, at) => `#${at + 100}=IFCLOCALPLACEMENT(${at === 0 ? '$' : `#${at + 99}`},#50);`).join(
			'',
		);
		const { placementOf } = head(
			`${project('#9')}${millimetre}${steps}#50=IFCAXIS2PLACEMENT3D(#51,$,$);#51=IFCCARTESIANPOINT((1.,2.,0.));#60=IFCLOCALPLACEMENT(#61,#50);#61=IFCLOCALPLACEMENT(#60,#50);`,
		);
		const { matrix, fault } = placementOf(30_099);
		expect([matrix[3], matrix[7], matrix[11], fault]).toEqual([30_000, 60_000, 0, null]);
		expect(placementOf(60).fault).toBe('cycle');
		expect(placementOf(99_999).fault).toBe('missing');
	});

	it('an element on a grid stands where its two axes cross, shifted as the offsets say', () => {
		const number = fc.integer({ min: -20_000, max: 20_000 });
		fc.assert(
			fc.property(
				number,
				number,
				fc.double({ min: 0.3, max: 2.8, noNaN: true }),
				fc.integer({ min: -500, max: 500 }),
				(x, y, angle, offset) => {
					// Axis A runs along X through y; axis 1 at an angle through (x, 0).
					const [c, s] = [Math.cos(angle), Math.sin(angle)];
					const point = (px: number, py: number): string => `IFCCARTESIANPOINT((${px.toFixed(9)},${py.toFixed(9)}));`;
					const { placementOf, reading } = head(
						`${project('#9')}${millimetre}#10=IFCGRID('g',$,$,$,$,#11,$,(#20),(#30),$);#11=IFCLOCALPLACEMENT($,#12);#12=IFCAXIS2PLACEMENT3D(#13,$,$);#13=IFCCARTESIANPOINT((1000.,2000.,300.));` +
							`#20=IFCGRIDAXIS('A',#21,.T.);#21=IFCPOLYLINE((#22,#23));#22=${point(-1000, y)}#23=${point(1000, y)}` +
							`#30=IFCGRIDAXIS('1',#31,.T.);#31=IFCPOLYLINE((#32,#33));#32=${point(x, 0)}#33=${point(x + 5000 * c, 5000 * s)}` +
							`#40=IFCGRIDPLACEMENT(#41,$);#41=IFCVIRTUALGRIDINTERSECTION((#20,#30),(${offset}.,0.,50.));`,
					);
					const { matrix, gridPlacement } = placementOf(40);
					expect(gridPlacement).toBe(40);
					// Axis A is shifted to its left, which is +Y.
					expect(matrix[7]).toBeCloseTo(2000 + y + offset, 4);
					expect(matrix[3]).toBeCloseTo(1000 + x + ((y + offset) * c) / s, 3);
					expect(matrix[11]).toBeCloseTo(350, 9);
					expect(reading.grid.map(({ tag, direction }) => tag + direction)).toEqual(['Au', '1v']);
				},
			),
			{ numRuns: 50 },
		);
	});
});

describe('the demo model', () => {
	it('has marks of at most 16 signs and ids, both once only, and titles by grid and storey', { timeout: 60_000 }, async () => {
		const reading = await readFileHere('fixtures/demo/pump-house.ifc');
		for (const key of ['id', 'mark'] as const)
			expect(new Set(reading.checkpoints.map((checkpoint) => checkpoint[key])).size).toBe(reading.checkpoints.length);
		expect(new Set(reading.elements.map(({ mark }) => mark)).size).toBe(reading.elements.length);
		expect(reading.checkpoints.filter(({ mark }) => mark.length > 16)).toEqual([]);
		const titles = reading.elements.map(({ title }) => title);
		expect(titles).toEqual(
			expect.arrayContaining(['Column C/3, ground', 'Wall A, 1–2, ground', 'Bolt 3 of C/3, ground', 'Beam B, 2–3, roof']),
		);
		expect(reading.elements.find(({ title }) => title === 'Column C/3, ground')?.mark).toBe('C3-G');
	});

	it('keeps its ids in the next revision, also on the columns that were moved', { timeout: 60_000 }, async () => {
		const first = await readFileHere('fixtures/demo/pump-house.ifc');
		const second = await readFileHere('fixtures/demo/pump-house-rev2.ifc');
		expect(new Set(second.checkpoints.map(({ id }) => id))).toEqual(new Set(first.checkpoints.map(({ id }) => id)));
		const places = new Map(first.checkpoints.map(({ id, place }) => [id, place]));
		const moved = second.checkpoints.filter(({ id, place }) => Math.hypot(...place.map((part, at) => part - places.get(id)![at]!)) > 0.001);
		expect(new Set(moved.map(({ globalId }) => globalId)).size).toBe(2);
	});
});

describe('the command', () => {
	it('lists what was asked for, as JSON and as CSV, and refuses the rest', { timeout: 300_000 }, async () => {
		const { exitCode, output } = await runCheckpoints(['fixtures/ifc/openhouse-ifc4.ifc', '--class', 'IfcWallStandardCase,IfcSlab']);
		expect(exitCode).toBe(0);
		const { elements, checkpoints, model } = output as {
			elements: { class: string; globalId: string }[];
			checkpoints: { globalId: string; mark: string }[];
			model: { sha256: string };
		};
		expect(new Set(elements.map((element) => element.class))).toEqual(new Set(['IfcWallStandardCase', 'IfcSlab']));
		expect(checkpoints.length).toBeGreaterThan(10);
		expect(checkpoints.every(({ globalId }) => elements.some((element) => element.globalId === globalId))).toBe(true);
		expect(model.sha256).toMatch(/^[0-9a-f]{64}$/);
		const csv = await runCheckpoints(['--csv', 'fixtures/ifc/openhouse-ifc4.ifc', '--class', 'ifcslab']);
		const [first, ...rows] = String(csv.output).trimEnd().split('\n');
		expect(first).toBe('mark,easting,northing,height,code');
		expect(rows.every((row) => /^[A-Z0-9.-]{1,16}(,-?\d+\.\d{4}){3},(PLAN|LEVEL|FACE)$/.test(row))).toBe(true);
		for (const args of [
			[],
			['no-such.ifc'],
			['a.ifc', 'b.ifc'],
			['a.ifc', '--colour'],
			['a.ifc', '--class'],
			['fixtures/ifc/hostile/garbage.ifc'],
		]) {
			const refusal = await runCheckpoints(args);
			expect(refusal.exitCode).toBe(2);
			expect((refusal.output as { error: { message: string } }).error.message.length).toBeGreaterThan(10);
		}
	});
});
