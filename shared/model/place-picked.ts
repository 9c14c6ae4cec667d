import type { Vector3 } from '../geometry/frame.ts';
import type { Checkpoint, Element } from './model-schema.ts';

/** A face under a pointer: a place on it and its normal toward whoever looks, design frame. The picture is single precision, good to a tenth of a millimetre. */
export interface PickedFace {
	readonly place: Vector3;
	readonly normal: Vector3;
}

export type PickedCheckpoint = Pick<Checkpoint, 'characteristic' | 'isSoffit'> & {
	readonly place: Vector3;
	readonly direction: Vector3 | null;
	readonly surface: Vector3 | null;
};

/** A face this near to level is asked for its level, not along its normal: the reading's own bound for a slab's top. */
const levelNz = 0.9;
/** How far a pick may lie beside the plane of a checkpoint that the reading placed, and still be on that plane. */
const samePlaneM = 0.002;
/** cos 0.2°. */
const sameWay = 0.999994;
const besideM = 0.002;

const dot = (a: Vector3, b: Vector3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

/**
 * The checkpoint that a pick on an element makes: a level on a nearly level face, else along the face's normal. Where the reading placed a
 * checkpoint on the same plane, that plane, which is in double precision, is taken; else the picked one.
 * @returns a sentence where the pick is not on the element's body, or its normal is no direction
 */
export function placePicked(
	element: Pick<Element, 'mark' | 'boxM'>,
	own: readonly Checkpoint[],
	{ place, normal }: PickedFace,
): PickedCheckpoint | { code: string; why: string } {
	const { boxM, mark } = element;
	if (boxM === null) return { code: 'no-body', why: `${mark} has no body in the file to place a checkpoint on.` };
	const length = Math.hypot(...normal);
	if (!(length > 0.5 && length < 2)) return { code: 'no-direction', why: 'The face’s normal is no direction. Pick the place again.' };
	const isOn = place.every((part, axis) => part >= boxM.min[axis]! - besideM && part <= boxM.max[axis]! + besideM);
	if (!isOn) return { code: 'not-on-element', why: `This place is not on ${mark}. Pick the place again.` };
	const [nx, ny, nz] = normal.map((part) => part / length) as [number, number, number];
	if (Math.abs(nz) > levelNz) {
		const isSoffit = nz < 0;
		const known = own.find(
			({ characteristic, surface, isSoffit: isBelow }) =>
				characteristic === 'level' &&
				surface !== null &&
				isBelow === isSoffit &&
				isSameSlope(surface, [-nx / nz, -ny / nz]) &&
				Math.abs(heightOn(surface, place) - place[2]) < samePlaneM,
		)?.surface;
		const [a, b] = [0 - nx / nz, 0 - ny / nz];
		// Flat to a tenth of a millimetre over ten metres is level.
		const isFlat = Math.hypot(a, b) < 1e-5;
		const surface: Vector3 = known ?? (isFlat ? [0, 0, place[2]] : [a, b, place[2] - a * place[0] - b * place[1]]);
		return { characteristic: 'level', place: [place[0], place[1], heightOn(surface, place)], direction: null, surface, isSoffit };
	}
	const known = own.find(
		({ characteristic, direction, place: on }) =>
			characteristic === 'face' &&
			direction !== null &&
			dot(direction, [nx, ny, nz]) > sameWay &&
			Math.abs(dot(direction, [place[0] - on[0], place[1] - on[1], place[2] - on[2]])) < samePlaneM,
	);
	if (known?.direction == null) return { characteristic: 'face', place, direction: [nx, ny, nz], surface: null, isSoffit: false };
	const { direction, place: on } = known;
	const offM = dot(direction, [place[0] - on[0], place[1] - on[1], place[2] - on[2]]);
	const onPlane: Vector3 = [place[0] - offM * direction[0], place[1] - offM * direction[1], place[2] - offM * direction[2]];
	return { characteristic: 'face', place: onPlane, direction, surface: null, isSoffit: false };
}

function heightOn([a, b, c]: Vector3, [x, y]: Vector3): number {
	return a * x + b * y + c;
}

function isSameSlope([a, b]: Vector3, [otherA, otherB]: readonly [number, number]): boolean {
	return Math.hypot(a - otherA, b - otherB) < 0.0035;
}
