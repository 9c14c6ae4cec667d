import type { Vector3 } from '../geometry/frame.ts';
import type { CheckInputCheckpoint } from './check-input.ts';

/** Where a measured place stands to a checkpoint, metres. */
export interface Meeting {
	/** face: along the outward normal; level: measured Z less the design surface's; plan: the horizontal distance. */
	readonly deviationM: number;
	/** face: in its plane; level: in plan; plan: the difference in height (not part of the deviation). */
	readonly asideM: number;
	/** The offset already taken off; design frame. */
	readonly measured: Vector3;
}

/** Z of the design surface of a level checkpoint over a plan position; the place's own height where the surface is not given. */
export function designLevelM(checkpoint: CheckInputCheckpoint, east: number, north: number): number {
	if (checkpoint.surface === null) return checkpoint.place[2];
	const [a, b, c] = checkpoint.surface;
	return a * east + b * north + c;
}

/** The outward unit normal that an offset is taken off along: none in plan. A soffit faces down. */
export function outwardNormal(checkpoint: CheckInputCheckpoint): Vector3 | null {
	if (checkpoint.characteristic === 'plan') return null;
	if (checkpoint.characteristic === 'level') return checkpoint.isSoffit ? [0, 0, -1] : [0, 0, 1];
	return checkpoint.direction;
}

/** The deviation of a carried place from a checkpoint, the offset taken off, and how far aside it was measured. */
export function meet(checkpoint: CheckInputCheckpoint, carried: Vector3, offsetMm: number): Meeting {
	const normal = outwardNormal(checkpoint);
	const offsetM = offsetMm / 1000;
	const measured: Vector3 =
		normal === null ? carried : [carried[0] - offsetM * normal[0], carried[1] - offsetM * normal[1], carried[2] - offsetM * normal[2]];
	const e = measured[0] - checkpoint.place[0];
	const n = measured[1] - checkpoint.place[1];
	const h = measured[2] - checkpoint.place[2];
	if (checkpoint.characteristic === 'plan') return { deviationM: Math.hypot(e, n), asideM: Math.abs(h), measured };
	if (checkpoint.characteristic === 'level') {
		return { deviationM: measured[2] - designLevelM(checkpoint, measured[0], measured[1]), asideM: Math.hypot(e, n), measured };
	}
	const [ne, nn, nh] = normal ?? [0, 0, 1];
	const along = e * ne + n * nn + h * nh;
	return { deviationM: along, asideM: Math.hypot(e - along * ne, n - along * nn, h - along * nh), measured };
}

/** Whether a place meets a checkpoint: `whyOutOfReach` without the words. */
export function isWithinReach(checkpoint: CheckInputCheckpoint, meeting: Meeting, reachM: number, isByName: boolean): boolean {
	if (Math.abs(meeting.deviationM) > reachM) return false;
	return meeting.asideM <= reachM || (isByName && checkpoint.characteristic === 'plan');
}

/**
 * Why a place does not meet a checkpoint; null where it does. By name a mark in plan may be sighted at any height (a column's centre at
 * breast height); by nearness alone the height must fit too.
 */
export function whyOutOfReach(checkpoint: CheckInputCheckpoint, meeting: Meeting, reachM: number, isByName: boolean): string | null {
	if (Math.abs(meeting.deviationM) > reachM) {
		const what =
			checkpoint.characteristic === 'plan'
				? 'from its mark'
				: checkpoint.characteristic === 'level'
					? 'above or below its level'
					: 'off the face';
		return `measured ${metres(Math.abs(meeting.deviationM))} ${what}, further than the reach of ${metres(reachM)}`;
	}
	if (!isWithinReach(checkpoint, meeting, reachM, isByName)) {
		const what =
			checkpoint.characteristic === 'plan'
				? 'above or below it'
				: checkpoint.characteristic === 'level'
					? 'beside it in plan'
					: 'beside it along the face';
		return `measured ${metres(meeting.asideM)} ${what}, further than the reach of ${metres(reachM)}`;
	}
	return null;
}

function metres(lengthM: number): string {
	return `${lengthM < 9.995 ? lengthM.toFixed(2) : lengthM.toFixed(1)} m`;
}
