import type { Matrix3, Vector3 } from './frame.ts';

/** Rotations as nine numbers, row by row, in a Float64Array: inner loops keep no small objects. */

/**
 * Turns `rotation` in place by a small or large turn: rotation ← exp([turn]×)·rotation.
 * @param rotation nine numbers, row by row, orthonormal, det +1
 * @param turnX, turnY, turnZ the rotation vector, radians, about the axes of the frame that `rotation` leads to (Rodrigues 1840)
 */
export function turnAfter(rotation: Float64Array, turnX: number, turnY: number, turnZ: number): void {
	const angle = Math.hypot(turnX, turnY, turnZ);
	if (angle === 0) return;
	const sine = Math.sin(angle) / angle;
	// (1 − cos)/angle² by the half angle: no cancellation for the last, tiny turns of an iteration, and no underflow.
	const half = Math.sin(angle / 2) / angle;
	const versine = 2 * half * half;
	for (let column = 0; column < 3; column++) {
		const x = rotation[column]!;
		const y = rotation[3 + column]!;
		const z = rotation[6 + column]!;
		const crossX = turnY * z - turnZ * y;
		const crossY = turnZ * x - turnX * z;
		const crossZ = turnX * y - turnY * x;
		rotation[column] = x + sine * crossX + versine * (turnY * crossZ - turnZ * crossY);
		rotation[3 + column] = y + sine * crossY + versine * (turnZ * crossX - turnX * crossZ);
		rotation[6 + column] = z + sine * crossZ + versine * (turnX * crossY - turnY * crossX);
	}
	orthonormalise(rotation);
}

/** Takes rounding out of a matrix that is a rotation but for it (Gram–Schmidt on the rows; the third is the cross product, so det = +1). In place. */
export function orthonormalise(rotation: Float64Array): void {
	let length = Math.hypot(rotation[0]!, rotation[1]!, rotation[2]!);
	const ax = rotation[0]! / length;
	const ay = rotation[1]! / length;
	const az = rotation[2]! / length;
	const along = ax * rotation[3]! + ay * rotation[4]! + az * rotation[5]!;
	let bx = rotation[3]! - along * ax;
	let by = rotation[4]! - along * ay;
	let bz = rotation[5]! - along * az;
	length = Math.hypot(bx, by, bz);
	bx /= length;
	by /= length;
	bz /= length;
	rotation[0] = ax;
	rotation[1] = ay;
	rotation[2] = az;
	rotation[3] = bx;
	rotation[4] = by;
	rotation[5] = bz;
	rotation[6] = ay * bz - az * by;
	rotation[7] = az * bx - ax * bz;
	rotation[8] = ax * by - ay * bx;
}

/** The turn by `yawRad` about +Z, counter-clockwise seen from above. Nine numbers, row by row. */
export function yawRotation(yawRad: number): Float64Array {
	const cosine = Math.cos(yawRad);
	const sine = Math.sin(yawRad);
	return Float64Array.of(cosine, -sine, 0, sine, cosine, 0, 0, 0, 1);
}

/** The rotation vector (axis times angle, radians, 0…π) of a rotation given by nine numbers, row by row. */
export function rotationVector(rotation: ArrayLike<number>): Vector3 {
	const x = rotation[7]! - rotation[5]!;
	const y = rotation[2]! - rotation[6]!;
	const z = rotation[3]! - rotation[1]!;
	const sine2 = Math.hypot(x, y, z);
	const cosine2 = rotation[0]! + rotation[4]! + rotation[8]! - 1;
	const angle = Math.atan2(sine2, cosine2);
	if (sine2 > 1e-6) return [(x / sine2) * angle, (y / sine2) * angle, (z / sine2) * angle];
	if (cosine2 > 0) return [x / 2, y / 2, z / 2];
	// Half a turn: the axis is the longest column of R + I.
	let best = 0;
	for (let k = 1; k < 3; k++) if (rotation[4 * k]! > rotation[4 * best]!) best = k;
	const column = [0, 1, 2].map((row) => rotation[3 * row + best]! + (row === best ? 1 : 0));
	const length = Math.hypot(...column);
	const sign = column[0]! * x + column[1]! * y + column[2]! * z < 0 ? -1 : 1;
	return [(sign * column[0]! * angle) / length, (sign * column[1]! * angle) / length, (sign * column[2]! * angle) / length];
}

/** Nine numbers, row by row, as a matrix of rows. */
export function toMatrix3(rows: ArrayLike<number>): Matrix3 {
	return [
		[rows[0]!, rows[1]!, rows[2]!],
		[rows[3]!, rows[4]!, rows[5]!],
		[rows[6]!, rows[7]!, rows[8]!],
	];
}
