import type { Finding } from '../fit/fit-schema.ts';
import { figureInWords, modelFinding } from './ifc-finding.ts';
import type { Part21File } from './part21.ts';
import { enumerationOf, numberOf, refOf, refsOf, textOf } from './part21-value.ts';

/** The length unit of a model, read from IfcUnitAssignment (ISO 16739-1). */

const PREFIX: Readonly<Record<string, number>> = {
	EXA: 1e18,
	PETA: 1e15,
	TERA: 1e12,
	GIGA: 1e9,
	MEGA: 1e6,
	KILO: 1e3,
	HECTO: 1e2,
	DECA: 1e1,
	DECI: 1e-1,
	CENTI: 1e-2,
	MILLI: 1e-3,
	MICRO: 1e-6,
	NANO: 1e-9,
	PICO: 1e-12,
	FEMTO: 1e-15,
	ATTO: 1e-18,
};

const NAMED: readonly (readonly [number, string])[] = [
	[1, 'metre'],
	[0.1, 'decimetre'],
	[0.01, 'centimetre'],
	[0.001, 'millimetre'],
	[1000, 'kilometre'],
	[0.3048, 'foot'],
	[1200 / 3937, 'US survey foot'],
	[0.0254, 'inch'],
	[0.9144, 'yard'],
	[1609.344, 'mile'],
];

/** A length unit in words, from its metres: "millimetre"; one that has no name: "unit of 0.5 m". */
export function unitInWords(metresPerUnit: number): string {
	for (const [metres, name] of NAMED) if (Math.abs(metresPerUnit - metres) < metres * 1e-7) return name;
	return `unit of ${figureInWords(metresPerUnit)} m`;
}

/** Metres per unit of a named unit entity; null where it is no length unit or cannot be followed. */
export function lengthUnitM(file: Part21File, unitNumber: number): number | null {
	let factor = 1;
	let number: number | null = unitNumber;
	const seen = new Set<number>();
	while (number !== null) {
		if (seen.has(number) || seen.size > 8) return null;
		seen.add(number);
		const unit = file.entity(number);
		if (!unit) return null;
		// `$` for `*` and a missing UnitType are common; the name METRE says it.
		const kind = enumerationOf(unit.args[1]);
		if (unit.type === 'IFCSIUNIT') {
			const isMetre = enumerationOf(unit.args[3]) === 'METRE' || enumerationOf(unit.args.at(-1)) === 'METRE';
			if (!isMetre || (kind !== null && kind !== 'LENGTHUNIT')) return null;
			const prefix = enumerationOf(unit.args[2]);
			const prefixFactor = prefix === null || prefix === 'METRE' ? 1 : PREFIX[prefix];
			return prefixFactor === undefined ? null : factor * prefixFactor;
		}
		if (unit.type !== 'IFCCONVERSIONBASEDUNIT' && unit.type !== 'IFCCONVERSIONBASEDUNITWITHOFFSET') return null;
		if (kind !== null && kind !== 'LENGTHUNIT') return null;
		const measure = file.entity(refOf(unit.args[3]) ?? -1);
		const value = numberOf(measure?.args[0]);
		if (!measure || value === null || !(value > 0)) return null;
		factor *= value;
		number = refOf(measure.args[1]);
	}
	return null;
}

export type ModelUnit = { metresPerUnit: number; words: string; findings: Finding[] };

function lengthUnitsOf(file: Part21File, assignment: number): { metresPerUnit: number; name: string | null }[] {
	const found: { metresPerUnit: number; name: string | null }[] = [];
	for (const ref of refsOf(file.entity(assignment)?.args[0])) {
		const metresPerUnit = lengthUnitM(file, ref);
		const unit = file.entity(ref);
		if (metresPerUnit !== null && unit) found.push({ metresPerUnit, name: unit.type === 'IFCSIUNIT' ? null : textOf(unit.args[2]) });
	}
	return found;
}

/** The sentence of a file that names no length unit, told where a person may choose one. */
export const noLengthUnit =
	'The file does not say its length unit (no LENGTHUNIT that can be followed to the metre in any IfcUnitAssignment). It is not guessed: choose the unit, or export the model again with units.';

/** Units that a person may choose for a file that names none, metres per unit. */
export const usualUnitsM: readonly number[] = [1, 0.01, 0.001, 0.3048, 0.0254, 1200 / 3937];

const isSameUnit = (one: number, other: number): boolean => Math.abs(one / other - 1) <= 1e-9;

/**
 * The file's length unit, metres per unit. Null with a reason where none can be read: it is never assumed. `chosenM`: a person's choice,
 * which holds only where the file names no unit, or several with this among them.
 * Findings: several projects, two length units that contradict each other, a project without units, a unit that a person chose.
 */
export function readModelUnit(
	file: Part21File,
	chosenM: number | null = null,
): { ok: true; unit: ModelUnit } | { ok: false; message: string } {
	const findings: Finding[] = [];
	const projects = file.ofType('IFCPROJECT');
	const found: { metresPerUnit: number; name: string | null; from: string }[] = [];
	for (const project of projects) {
		const assignment = refOf(file.entity(project)?.args[8]);
		if (assignment !== null) for (const unit of lengthUnitsOf(file, assignment)) found.push({ ...unit, from: `project #${project}` });
	}
	if (projects.length > 1)
		findings.push(
			modelFinding(
				'several-projects',
				`The file holds ${projects.length} projects (IfcProject). They are read as one model${found.length > 0 ? ` in ${unitInWords(found[0]!.metresPerUnit)}` : ''}.`,
				{ projects },
			),
		);
	if (found.length === 0) {
		for (const assignment of file.ofType('IFCUNITASSIGNMENT')) {
			for (const unit of lengthUnitsOf(file, assignment)) found.push({ ...unit, from: `unit assignment #${assignment}` });
		}
		if (found.length > 0)
			findings.push(
				modelFinding(
					'unit-not-in-project',
					`No project names its length unit: the ${unitInWords(found[0]!.metresPerUnit)} is taken from the ${found[0]!.from}.`,
					{
						metresPerUnit: found[0]!.metresPerUnit,
					},
				),
			);
	}
	if (found.length === 0 && chosenM !== null) {
		findings.push(
			modelFinding('unit-chosen', `The file does not say its length unit. It is read in ${unitInWords(chosenM)}, as a person chose.`, {
				metresPerUnit: chosenM,
			}),
		);
		return { ok: true, unit: { metresPerUnit: chosenM, words: unitInWords(chosenM), findings } };
	}
	const first = found[0];
	if (!first) return { ok: false, message: noLengthUnit };
	const isContradictory = found.some((unit) => !isSameUnit(unit.metresPerUnit, first.metresPerUnit));
	const chosen = isContradictory && chosenM !== null ? found.find((unit) => isSameUnit(unit.metresPerUnit, chosenM)) : undefined;
	const used = (chosen ?? first).metresPerUnit;
	if (isContradictory)
		findings.push(
			modelFinding(
				'unit-contradiction',
				`The file names more than one length unit: ${found.map((unit) => `${unitInWords(unit.metresPerUnit)} (in ${unit.from})`).join(', ')}. ${chosen === undefined ? 'The first is used; check a known length before anything else.' : `It is read in ${unitInWords(used)}, as a person chose.`}`,
				{ readings: found.map((unit) => ({ metresPerUnit: unit.metresPerUnit, from: unit.from })), used },
			),
		);
	return { ok: true, unit: { metresPerUnit: used, words: unitInWords(used), findings } };
}
