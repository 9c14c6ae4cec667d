import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Finding } from '#shared/fit/fit-schema.ts';
import { counted, figureInWords } from '#shared/model/ifc-finding.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';

const file = (data: string): Uint8Array =>
	new TextEncoder().encode(`ISO-10303-21;HEADER;FILE_SCHEMA(('IFC4'));ENDSEC;DATA;${data}ENDSEC;END-ISO-10303-21;`);
function findingsOf(bytes: Uint8Array): Finding[] {
	const opened = readModelHead(bytes);
	return opened.ok ? opened.head.findings : [];
}

const units = "#1=IFCPROJECT('0',$,'Site',$,$,$,$,$,#2);#2=IFCUNITASSIGNMENT((#9));#9=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);";
const map = (scale: string): string =>
	`${units}#20=IFCMAPCONVERSION(#21,#22,458657.3,5438232.25,113.7,0.27,0.96,${scale});#22=IFCPROJECTEDCRS('X',$,$,$,$,$,#23);#23=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);`;
const made = [
	map('0.00099973'),
	map('1.'),
	map('$'),
	`${units}#30=IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-5,#31,$);#31=IFCAXIS2PLACEMENT3D(#32,$,$);#32=IFCCARTESIANPOINT((100100.1,-200.2,3.3));`,
	`${units}#40=IFCWALL('a');#40=IFCWALL('b');`,
	`${units}#=IFCWALL('a');`,
	`${units}#3=IFCPROJECT('1',$,'Other',$,$,$,$,$,#4);#4=IFCUNITASSIGNMENT((#10));#10=IFCCONVERSIONBASEDUNIT(#8,.LENGTHUNIT.,'X',#11);#11=IFCMEASUREWITHUNIT(0.1234567890123,#12);#12=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);`,
];

describe('what is said of a model', () => {
	const folders = ['fixtures/ifc', 'fixtures/ifc/hostile'];
	const said = [
		...made.map(file),
		...folders.flatMap((folder) =>
			readdirSync(folder)
				.filter((name) => name.endsWith('.ifc'))
				.map((name) => new Uint8Array(readFileSync(join(folder, name)))),
		),
	].flatMap(findingsOf);

	it('are sentences with round figures', () => {
		expect(new Set(said.map(({ code }) => code)).size).toBeGreaterThan(7);
		for (const { message } of said) {
			expect(message).toMatch(/^[A-Z0-9].*\.$/);
			expect(message).not.toMatch(/\d*\.\d{9,}|undefined|NaN/);
			expect(message).not.toMatch(/^1 \w+s /);
			expect(message).not.toMatch(/ {2}|\.\.$/);
		}
	});

	it('gives the scale factor as it was meant', () => {
		const [finding] = findingsOf(file(map('0.00099973')));
		expect(finding?.message).toBe(
			'The map conversion has a scale factor of 0.99973 beyond the units (-270.0 ppm). By the standard it multiplies heights too: 13.5 mm at 50 m.',
		);
		expect(figureInWords(1200 / 3937)).toBe('0.30480061');
		expect(figureInWords(-0)).toBe('0');
		expect(counted(1, 'element has', 'elements have')).toBe('1 element has');
	});
});
