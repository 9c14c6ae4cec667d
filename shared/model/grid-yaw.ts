import type { GridAxis } from './model-schema.ts';

/** Which way the grid's first axis runs in plan, counter-clockwise from east, radians; null without a grid. Design frame. */
export function gridYawRad(grid: readonly GridAxis[]): number | null {
	const axis = grid.find(({ direction, points }) => direction === 'u' && points.length > 1) ?? grid.find(({ points }) => points.length > 1);
	const [from, to] = [axis?.points[0], axis?.points.at(-1)];
	return from === undefined || to === undefined ? null : Math.atan2(to[1] - from[1], to[0] - from[0]);
}
