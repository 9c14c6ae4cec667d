import type { GridAxis } from './model-schema.ts';
import type { PickedAxis } from './reading-choices.ts';

/** Two picks nearer than this name no direction, metres. */
export const shortestAxisM = 0.5;

/**
 * Axes picked by people as grid axes. The first one's direction is u; what lies within 45° of it too, all others are v: marks are made of one
 * axis of each.
 */
export function gridOfPicked(axes: readonly PickedAxis[]): GridAxis[] {
	const [first] = axes;
	if (first === undefined) return [];
	const [ex, ey] = [first.to[0] - first.from[0], first.to[1] - first.from[1]];
	return axes.map(({ tag, from, to }) => {
		const [dx, dy] = [to[0] - from[0], to[1] - from[1]];
		const isAlong = Math.abs(ex * dx + ey * dy) >= Math.SQRT1_2 * Math.hypot(ex, ey) * Math.hypot(dx, dy);
		return { tag, direction: isAlong ? 'u' : 'v', points: [[...from], [...to]] };
	});
}
