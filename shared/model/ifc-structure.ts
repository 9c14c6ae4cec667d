import type { ReadPlacement } from './ifc-placement.ts';
import { readAxisPlacement } from './ifc-placement.ts';
import type { Part21File } from './part21.ts';
import { numberOf, refOf, refsOf, textOf } from './part21-value.ts';

/** Where elements belong: storeys, and what is part of, fills or voids what (ISO 16739-1). */

export type Storey = { number: number; name: string; elevationM: number | null; buildingName: string };

export type ModelStructure = {
	storeys: Storey[];
	/** The storey an element stands in, by containment, else through what it is part of, fills or voids; null where there is none. Cycles end the climb. */
	storeyOf: (element: number) => Storey | null;
	/** What an element is a part of (assembly, stair), else null. */
	wholeOf: (element: number) => number | null;
	/** Elements that are made of others. */
	hasParts: (element: number) => boolean;
	/** Entities that are contained in themselves, found while climbing. */
	cycles: Set<number>;
};

/** Builds the maps once, from the relations. `placementOf` gives heights to storeys that have no Elevation; metresPerUnit is the file's. */
export function readStructure(
	file: Part21File,
	metresPerUnit: number,
	placementOf: (number: number | null) => ReadPlacement,
): ModelStructure {
	const containedIn = new Map<number, number>();
	const partOf = new Map<number, number>();
	const wholes = new Set<number>();
	for (const number of file.ofType('IFCRELCONTAINEDINSPATIALSTRUCTURE')) {
		const relation = file.entity(number);
		const structure = refOf(relation?.args[5]);
		if (structure !== null) for (const element of refsOf(relation?.args[4])) containedIn.set(element, structure);
	}
	for (const number of file.ofType('IFCRELAGGREGATES', 'IFCRELNESTS', 'IFCRELDECOMPOSES')) {
		const relation = file.entity(number);
		const whole = refOf(relation?.args[4]);
		if (whole === null) continue;
		wholes.add(whole);
		for (const part of refsOf(relation?.args[5])) partOf.set(part, whole);
	}
	for (const number of file.ofType('IFCRELFILLSELEMENT', 'IFCRELVOIDSELEMENT', 'IFCRELPROJECTSELEMENT')) {
		const relation = file.entity(number);
		const whole = refOf(relation?.args[4]);
		const part = refOf(relation?.args[5]);
		if (whole !== null && part !== null && !partOf.has(part)) partOf.set(part, whole);
	}

	const cycles = new Set<number>();
	const climb = (start: number, isThere: (number: number) => boolean): number | null => {
		const seen = new Set<number>();
		let number: number | undefined = start;
		while (number !== undefined) {
			if (seen.has(number)) {
				cycles.add(number);
				return null;
			}
			seen.add(number);
			if (isThere(number)) return number;
			number = containedIn.get(number) ?? partOf.get(number);
		}
		return null;
	};

	const storeys: Storey[] = [];
	const byNumber = new Map<number, Storey>();
	for (const number of file.ofType('IFCBUILDINGSTOREY')) {
		const entity = file.entity(number);
		if (!entity) continue;
		const elevation = numberOf(entity.args[9]);
		const placement = placementOf(refOf(entity.args[5]));
		const placedM = placement.fault === null && refOf(entity.args[5]) !== null ? placement.matrix[11]! * metresPerUnit : null;
		// The placement is what the geometry follows; the attribute is for people and may be written relative to the building.
		const elevationM = placedM ?? (elevation === null ? null : elevation * metresPerUnit);
		const building = climb(number, (at) => file.typeOf(at) === 'IFCBUILDING');
		const storey: Storey = {
			number,
			name: textOf(entity.args[2]) ?? textOf(entity.args[7]) ?? '',
			elevationM: elevationM !== null && Number.isFinite(elevationM) && Math.abs(elevationM) <= 1e8 ? elevationM : null,
			buildingName: building === null ? '' : (textOf(file.entity(building)?.args[2]) ?? ''),
		};
		storeys.push(storey);
		byNumber.set(number, storey);
	}

	return {
		storeys,
		storeyOf: (element) => {
			const found = climb(element, (at) => byNumber.has(at));
			return found === null ? null : byNumber.get(found)!;
		},
		wholeOf: (element) => partOf.get(element) ?? null,
		hasParts: (element) => wholes.has(element),
		cycles,
	};
}

/** The WorldCoordinateSystem of each geometric context that is not the identity: shift in metres and whether it is turned. */
export function readWorldSystems(
	file: Part21File,
	metresPerUnit: number,
): { context: number; shiftM: [number, number, number]; isTurned: boolean }[] {
	const found: { context: number; shiftM: [number, number, number]; isTurned: boolean }[] = [];
	for (const number of file.ofType('IFCGEOMETRICREPRESENTATIONCONTEXT')) {
		const entity = file.entity(number);
		if (numberOf(entity?.args[2]) === 2) continue;
		const matrix = readAxisPlacement(file, refOf(entity?.args[4]));
		if (!matrix) continue;
		const shiftM: [number, number, number] = [matrix[3]! * metresPerUnit, matrix[7]! * metresPerUnit, matrix[11]! * metresPerUnit];
		const isTurned = Math.abs(matrix[0]! - 1) + Math.abs(matrix[5]! - 1) + Math.abs(matrix[10]! - 1) > 1e-9;
		if (isTurned || Math.hypot(...shiftM) > 1e-6) found.push({ context: number, shiftM, isTurned });
	}
	return found;
}
