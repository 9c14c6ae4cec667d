import type { CheckInputCheckpoint } from './check-input.ts';

/** Whether one shot tells of all of these: marks of one element, in plan and in level, each kind once, at one place (5 cm). */
export function isOneShot(checkpoints: readonly CheckInputCheckpoint[]): boolean {
	const [first] = checkpoints;
	return checkpoints.every(
		(checkpoint, index) =>
			checkpoint.characteristic !== 'face' &&
			checkpoint.elementId === first!.elementId &&
			Math.hypot(...[0, 1, 2].map((axis) => checkpoint.place[axis]! - first!.place[axis]!)) <= 0.05 &&
			checkpoints.findIndex(({ characteristic }) => characteristic === checkpoint.characteristic) === index,
	);
}

/** Of several faces of one element that look different ways, the one whose plane the point is clearly nearest to (three times, and 3 cm). */
export function nearestFace(candidates: readonly { index: number; checkpoint: CheckInputCheckpoint; offM: number }[]): number | null {
	const sorted = [...candidates].sort((a, b) => a.offM - b.offM);
	const [best, second] = sorted;
	if (best === undefined || second === undefined) return best?.index ?? null;
	const normal = best.checkpoint.direction;
	const areTurned = sorted.every(({ checkpoint }, rank) => {
		if (checkpoint.characteristic !== 'face' || checkpoint.elementId !== best.checkpoint.elementId) return false;
		if (rank === 0 || normal === null || checkpoint.direction === null) return rank === 0;
		const [x, y, z] = checkpoint.direction;
		return normal[0] * x + normal[1] * y + normal[2] * z < 0.8;
	});
	return areTurned && second.offM > Math.max(3 * best.offM, 0.03) ? best.index : null;
}
