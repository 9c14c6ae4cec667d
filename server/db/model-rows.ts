import type { StoredElement } from '#shared/model/contract.ts';
import type { Checkpoint, Element } from '#shared/model/model-schema.ts';
import type { checkpoints, elements } from './schema/model.ts';

/** An element as the shared arithmetic knows it, with the id it is stored under. Metres, design frame. */
export function elementOf(row: typeof elements.$inferSelect): Element & Pick<StoredElement, 'elementId'> {
	return {
		elementId: row.id,
		entityNumber: row.entityNumber,
		globalId: row.globalId,
		...(row.fileGlobalId !== null && { fileGlobalId: row.fileGlobalId }),
		class: row.class,
		name: row.name,
		tag: row.tag,
		storey: row.storey,
		mark: row.mark,
		title: row.title,
		sizesM: { length: row.lengthM, height: row.heightM, thickness: row.thicknessM },
		boxM: row.boxM === null ? null : { min: vectorOf(row.boxM), max: vectorOf(row.boxM.slice(3)) },
	};
}

/** A checkpoint as the shared arithmetic knows it, with its element's id. Metres, design frame. */
export function checkpointOf(
	row: typeof checkpoints.$inferSelect,
	element: Pick<Element, 'entityNumber' | 'globalId'>,
): Checkpoint & { elementId: string } {
	return {
		id: row.id,
		elementId: row.elementId,
		entityNumber: element.entityNumber,
		globalId: element.globalId,
		mark: row.mark,
		characteristic: row.characteristic,
		place: [row.xM, row.yM, row.zM],
		direction: row.normal === null ? null : vectorOf(row.normal),
		label: row.label,
		surface: row.surface === null ? null : vectorOf(row.surface),
		isSoffit: row.isSoffit,
	};
}

/** Three numbers out of an array column; a defect where it holds fewer. */
export function vectorOf(numbers: readonly number[]): [number, number, number] {
	const [x, y, z] = numbers;
	if (x === undefined || y === undefined || z === undefined) throw new Error('A stored vector has fewer than three numbers.');
	return [x, y, z];
}
