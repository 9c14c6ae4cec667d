import type { Vector3 } from '../geometry/frame.ts';
import type { Checkpoint } from './model-schema.ts';

const csvField = (text: string): string => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

/**
 * Checkpoints for a field controller: `mark,easting,northing,height,code`, metres to 0.1 mm, one line each, the code being what is asked for
 * (PLAN, LEVEL, FACE). `placeOf` brings a place of the design to the frame of the list; the design frame's X, Y, Z where none is given.
 */
export function writeFieldCsv(
	checkpoints: readonly Pick<Checkpoint, 'mark' | 'place' | 'characteristic'>[],
	placeOf: (designPlace: Vector3) => Vector3 = (place) => place,
): string {
	const metres = (part: number): string => part.toFixed(4).replace(/^-(0\.0000)$/, '$1');
	const lines = checkpoints.map(({ mark, place, characteristic }) =>
		[csvField(mark), ...placeOf(place).map(metres), characteristic.toUpperCase()].join(','),
	);
	return `${['mark,easting,northing,height,code', ...lines].join('\n')}\n`;
}
