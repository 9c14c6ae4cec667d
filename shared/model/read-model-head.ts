import type { Finding } from '../fit/fit-schema.ts';
import type { Affine } from './affine.ts';
import { counted, figureInWords, modelFinding } from './ifc-finding.ts';
import { readGrids } from './ifc-grid.ts';
import { readMapConversion } from './ifc-map-conversion.ts';
import { placementReader, type ReadPlacement } from './ifc-placement.ts';
import { readSchemaName, type SchemaName } from './ifc-schema-name.ts';
import { type ModelStructure, readStructure, readWorldSystems } from './ifc-structure.ts';
import { readModelUnit } from './ifc-units.ts';
import type { ModelReading } from './model-schema.ts';
import { openPart21, type Part21File } from './part21.ts';
import { enumerationOf, numberOf, refOf, refsOf, textOf } from './part21-value.ts';
import { gridOfPicked } from './picked-axes.ts';
import { noChoices, type ReadingChoices } from './reading-choices.ts';

/** All of a model file that stands in its attributes: everything but the meshes. */
export type ModelHead = {
	file: Part21File;
	schema: SchemaName;
	reading: Pick<ModelReading, 'schema' | 'unit' | 'metresPerUnit' | 'project' | 'mapConversion' | 'storeys' | 'grid'>;
	structure: ModelStructure;
	/** Placements in file units. */
	placementOf: (number: number | null) => ReadPlacement;
	/** An IfcGridPlacement in file units. */
	gridMatrix: (number: number) => Affine | null;
	findings: Finding[];
};

export type HeadRefusal = { code: 'not-ifc' | 'cut-file' | 'unknown-schema' | 'unknown-unit'; message: string };

/** Radians per plane angle unit: degrees where the file says so by a conversion, else radians. */
function angleUnitRad(file: Part21File): number {
	for (const assignment of file.ofType('IFCUNITASSIGNMENT')) {
		for (const ref of refsOf(file.entity(assignment)?.args[0])) {
			const unit = file.entity(ref);
			if (unit?.type !== 'IFCCONVERSIONBASEDUNIT' || enumerationOf(unit.args[1]) !== 'PLANEANGLEUNIT') continue;
			const value = numberOf(file.entity(refOf(unit.args[3]) ?? -1)?.args[0]);
			if (value !== null && value > 0) return value;
		}
	}
	return 1;
}

function fileFindings(file: Part21File, schema: SchemaName): Finding[] {
	const findings: Finding[] = [];
	if (schema.isAlias)
		findings.push(
			modelFinding(
				'schema-alias',
				`The header names the schema ${schema.written}; it is read as ${schema.engineName}, which has the same entities.`,
				{
					written: schema.written,
					readAs: schema.engineName,
				},
			),
		);
	if (file.schemas.length > 1)
		findings.push(
			modelFinding(
				'several-schemas',
				`The header names ${file.schemas.length} schemas (${file.schemas.join(', ')}); ${schema.written} is read.`,
			),
		);
	if (file.repeatedNumbers.length > 0)
		findings.push(
			modelFinding(
				'repeated-entity-number',
				`${counted(file.repeatedNumbers.length, 'entity number is', 'entity numbers are')} given twice (the first is #${file.repeatedNumbers[0]}): the last entity of a number counts.`,
				{
					numbers: file.repeatedNumbers.slice(0, 20),
				},
			),
		);
	if (file.oddStatements > 0)
		findings.push(
			modelFinding(
				'odd-statements',
				`${counted(file.oddStatements, 'statement is no entity and was', 'statements are no entities and were')} passed over.`,
				{
					count: file.oddStatements,
				},
			),
		);
	if (!file.hasEndLine)
		findings.push(
			modelFinding(
				'no-end-line',
				'The last line END-ISO-10303-21 is missing. The DATA section is closed, so nothing of the model should be lost.',
			),
		);
	return findings;
}

/** Reads everything but the meshes. Refused: what is no IFC file, is cut, is of an unknown schema, or does not say its length unit. */
export function readModelHead(
	bytes: Uint8Array,
	choices: Pick<ReadingChoices, 'metresPerUnit' | 'mapScale' | 'axes'> = noChoices,
): { ok: true; head: ModelHead } | { ok: false; refusal: HeadRefusal } {
	const opened = openPart21(bytes);
	if (!opened.ok) return opened;
	const { file } = opened;
	const schema = readSchemaName(file);
	if (!schema.ok) return { ok: false, refusal: { code: 'unknown-schema', message: schema.message } };
	const unit = readModelUnit(file, choices.metresPerUnit);
	if (!unit.ok) return { ok: false, refusal: { code: 'unknown-unit', message: unit.message } };
	const { metresPerUnit } = unit.unit;
	const grid = readGrids(file, metresPerUnit, angleUnitRad(file));
	const placementOf = placementReader(file, grid.readGridPlacement);
	const structure = readStructure(file, metresPerUnit, placementOf);
	const map = readMapConversion(file, metresPerUnit, choices.mapScale);
	const findings = [...fileFindings(file, schema.schema), ...unit.unit.findings, ...map.findings];
	for (const system of readWorldSystems(file, metresPerUnit))
		findings.push(
			modelFinding(
				'world-coordinate-system',
				`The file's WorldCoordinateSystem (context #${system.context}) stands at ${system.shiftM.map((part) => `${figureInWords(part)} m`).join(', ')}${system.isTurned ? ' and is turned' : ''}. Programs differ on whether that moves the model: here it does not. Check one known point.`,
				{ shiftM: system.shiftM, isTurned: system.isTurned },
			),
		);
	const project = file.entity(file.ofType('IFCPROJECT')[0] ?? -1);
	return {
		ok: true,
		head: {
			file,
			schema: schema.schema,
			reading: {
				schema: schema.schema.written,
				unit: unit.unit.words,
				metresPerUnit,
				project: textOf(project?.args[2]) ?? textOf(project?.args[5]) ?? '',
				mapConversion: map.conversion,
				storeys: structure.storeys.map(({ name, elevationM }) => ({ name, elevationM })),
				// A person's axes stand in for a grid that the file does not have.
				grid: grid.axes.length > 0 ? grid.axes : gridOfPicked(choices.axes),
			},
			structure,
			placementOf,
			gridMatrix: grid.readGridPlacement,
			findings,
		},
	};
}
