import { designToMap, mapFrameOf, mapScaleFinding } from '#shared/control/map-frame.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { writeFieldCsv } from '#shared/model/write-field-csv.ts';
import type { Handle } from '../../db/database.ts';
import { Refused } from '../../platform/refuse.ts';
import { checkpointsOf, elementsOf, revisionDetailOf } from './queries.ts';

interface Asked {
	revisionId: string;
	frame: 'design' | 'map';
	storey: string | null;
}

/**
 * A revision's checkpoints for a field controller, without what is left out. Refused: the map frame where the model has none, or one whose
 * scale its units contradict; nothing to list.
 */
export async function fieldCsvOf(
	db: Handle,
	siteId: string,
	{ revisionId, frame, storey }: Asked,
): Promise<{ name: string; text: string }> {
	const detail = await revisionDetailOf(db, siteId, revisionId);
	const placeOf = frame === 'map' ? toMap(detail.reading) : undefined;
	const elements = await elementsOf(db, siteId, revisionId);
	const onStorey = new Set(elements.flatMap((element) => (storey === null || element.storey === storey ? [element.elementId] : [])));
	const asked = (await checkpointsOf(db, siteId, revisionId)).filter(
		({ elementId, requirement }) => onStorey.has(elementId) && requirement !== 'left-out',
	);
	if (asked.length === 0)
		throw new Refused('nothing-to-list', 'No checkpoint is asked for here, so there is nothing to take outside.', 'storey');
	return { name: `${detail.modelName} rev ${detail.number} ${frame}.csv`, text: writeFieldCsv(asked, placeOf) };
}

function toMap({ mapConversion, metresPerUnit }: Awaited<ReturnType<typeof revisionDetailOf>>['reading']): (place: Vector3) => Vector3 {
	if (mapConversion === null)
		throw new Refused('no-map-conversion', 'The model does not say where it lies on the map. Take the list in the design frame.', 'frame');
	const contradiction = mapScaleFinding(mapConversion, metresPerUnit);
	if (contradiction !== null)
		throw new Refused('map-scale', `${contradiction.message} Until then take the list in the design frame.`, 'frame');
	try {
		const mapFrame = mapFrameOf(mapConversion, metresPerUnit);
		return (place) => designToMap(mapFrame, place);
	} catch (error) {
		if (error instanceof RangeError) throw new Refused('no-map-conversion', error.message, 'frame');
		throw error;
	}
}
