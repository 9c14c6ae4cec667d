import type { Finding } from '#shared/fit/fit-schema.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { differenceOf, scaleShift } from '#shared/model/affine.ts';
import type { ReadPlacement } from '#shared/model/ifc-placement.ts';
import type { ElementDraft } from '#shared/model/model-elements.ts';
import type { ModelReading } from '#shared/model/model-schema.ts';
import { refOf, textOf } from '#shared/model/part21-value.ts';
import { type PlacedElement, placeCheckpoints } from '#shared/model/place-checkpoints.ts';
import type { ModelHead } from '#shared/model/read-model-head.ts';
import { noChoices, type ReadingChoices } from '#shared/model/reading-choices.ts';
import { dropBuriedPlateFaces } from './buried-plate-faces.ts';
import { elementFindings, manyElements } from './element-findings.ts';
import type { pictureBuilder } from './glb-picture.ts';
import type { IfcGeometry, RawMesh } from './ifc-geometry.ts';

/** Joins what the attributes say and what the engine shapes, element by element. */

export type ElementsRead = { drafts: ElementDraft[]; skipped: ModelReading['skipped']; findings: Finding[] };

/** From so many parts on, one checkpoint of each sort an element is placed, or nobody could use the list. */
const MANY_ELEMENTS = 20_000;

export class BrokenEngine extends Error {
	readonly entityNumber: number;
	constructor(entityNumber: number) {
		super(`The geometry engine broke on entity #${entityNumber}.`);
		this.entityNumber = entityNumber;
	}
}

const FAULTS: Readonly<Record<NonNullable<ReadPlacement['fault']>, string>> = {
	cycle: 'its placement hangs in a circle (a placement relative to itself), so its position is unknown',
	missing: 'its placement points to something that is not in the file or cannot be worked out, so its position is unknown',
	directions: 'its placement has directions that are empty, parallel or no numbers, so its position is unknown',
};

function boxOf(mesh: RawMesh): { min: Vector3; max: Vector3 } {
	const min: [number, number, number] = [Infinity, Infinity, Infinity];
	const max: [number, number, number] = [-Infinity, -Infinity, -Infinity];
	for (const vertex of mesh.triangles) {
		for (let k = 0; k < 3; k++) {
			const value = mesh.xyzM[vertex * 3 + k]!;
			if (value < min[k]!) min[k] = value;
			if (value > max[k]!) max[k] = value;
		}
	}
	return { min, max };
}

/** Of each sort (base, east face, top …) the middle one. */
function thinned(placed: PlacedElement): PlacedElement {
	const bySort = new Map<string, PlacedElement['drafts']>();
	for (const draft of placed.drafts) bySort.set(draft.code, [...(bySort.get(draft.code) ?? []), draft]);
	return { ...placed, drafts: [...bySort.values()].map((group) => group[group.length >> 1]!) };
}

/** Only where the file holds the new GlobalId and no longer the one that it is known under: else that would stand for two. */
function stillKnownAs(knownAs: ReadingChoices['knownAs'], inFile: readonly string[]): ReadonlyMap<string, string> {
	const there = new Set(inFile);
	return new Map(Object.entries(knownAs).filter(([own, known]) => there.has(own) && !there.has(known)));
}

/**
 * Goes through all elements. `before` is called with each entity number before the engine is asked for it (it may hang), 0 after;
 * `leaveOut`: elements not to ask for, and why. Throws BrokenEngine where the engine can no longer be used.
 */
export function readElements(
	head: ModelHead,
	geometry: IfcGeometry,
	picture: ReturnType<typeof pictureBuilder>,
	leaveOut: ReadonlyMap<number, string>,
	before: (entityNumber: number, done: number, of: number) => void,
	choices: Pick<ReadingChoices, 'placing' | 'knownAs'> = noChoices,
): ElementsRead {
	const { metresPerUnit } = head.reading;
	const drafts: ElementDraft[] = [];
	const skipped: ModelReading['skipped'] = [];
	const contradicting: string[] = [];
	const withoutBody: string[] = [];
	const byGlobalId = new Map<string, number>();
	const of = geometry.elements.length;
	const isMany = of > MANY_ELEMENTS;
	const knownAs = stillKnownAs(
		choices.knownAs,
		geometry.elements.map(({ entityNumber }) => textOf(head.file.entity(entityNumber)?.args[0]) ?? ''),
	);

	const linearContradiction = (placementNumber: number, placement: ReadPlacement): number => {
		if (placement.linearPlacement === null) return 0;
		const engine = geometry.placementOf(placementNumber);
		return engine ? differenceOf(scaleShift(engine, metresPerUnit), scaleShift(placement.matrix, metresPerUnit), 1) : 0;
	};

	geometry.elements.forEach(({ entityNumber, class: className }, done) => {
		const entity = head.file.entity(entityNumber);
		if (!entity) return;
		const fileGlobalId = textOf(entity.args[0]) ?? '';
		const globalId = knownAs.get(fileGlobalId) ?? fileGlobalId;
		byGlobalId.set(globalId, (byGlobalId.get(globalId) ?? 0) + 1);
		const name = textOf(entity.args[2]) ?? '';
		const draft: ElementDraft = {
			entityNumber,
			globalId,
			...(globalId !== fileGlobalId && { fileGlobalId }),
			class: className,
			name,
			tag: textOf(entity.args[7]) ?? '',
			storey: head.structure.storeyOf(entityNumber)?.name ?? '',
			boxM: null,
			placed: null,
		};
		drafts.push(draft);
		const skip = (why: string): void => {
			skipped.push({ entityNumber, globalId, class: className, why });
		};
		const left = leaveOut.get(entityNumber);
		if (left !== undefined) {
			skip(left);
			return;
		}
		const placementNumber = refOf(entity.args[5]);
		const placement = head.placementOf(placementNumber);
		if (placement.fault !== null && refOf(entity.args[6]) !== null) {
			withoutBody.push(globalId || `#${entityNumber}`);
			skip(FAULTS[placement.fault]);
			return;
		}
		const gridMatrix = placement.gridPlacement === null ? null : head.gridMatrix(placement.gridPlacement);

		before(entityNumber, done, of);
		let mesh: RawMesh | null;
		try {
			mesh = geometry.meshOf(entityNumber, gridMatrix && scaleShift(gridMatrix, metresPerUnit));
		} catch {
			throw new BrokenEngine(entityNumber);
		}
		if (!mesh) {
			if (refOf(entity.args[6]) === null && head.structure.hasParts(entityNumber)) return;
			withoutBody.push(globalId || `#${entityNumber}`);
			skip('it has no geometry that can be shown');
			return;
		}
		if (!mesh.isSound) {
			withoutBody.push(globalId || `#${entityNumber}`);
			skip('its geometry has coordinates that are no numbers or lie farther than 100 000 km');
			return;
		}
		draft.boxM = boxOf(mesh);
		picture.add(className, entityNumber, mesh);
		const apart = placementNumber === null ? 0 : linearContradiction(placementNumber, placement);
		if (apart > 0.001) {
			contradicting.push(globalId || `#${entityNumber}`);
			skip(
				`its place along the alignment and the position written beside it differ by ${apart.toFixed(3)} m: which one holds must be asked`,
			);
			return;
		}
		const placed = placeCheckpoints({ class: className, name, xyzM: mesh.xyzM, triangles: mesh.triangles }, choices.placing);
		draft.placed = isMany ? thinned(placed) : placed;
		if (placed.drafts.length === 0) skip(placed.why ?? 'its shape offers no place for a checkpoint');
	});
	if (!isMany)
		dropBuriedPlateFaces(drafts, (entityNumber) => {
			const entity = head.file.entity(entityNumber);
			const { gridPlacement } = head.placementOf(refOf(entity?.args[5]));
			const gridMatrix = gridPlacement === null ? null : head.gridMatrix(gridPlacement);
			before(entityNumber, of - 1, of);
			try {
				return geometry.meshOf(entityNumber, gridMatrix && scaleShift(gridMatrix, metresPerUnit));
			} catch {
				throw new BrokenEngine(entityNumber);
			}
		});
	before(0, of, of);
	return {
		drafts,
		skipped,
		findings: [...elementFindings(head, byGlobalId, withoutBody, contradicting, of), ...(isMany ? [manyElements(of)] : [])],
	};
}
