/** Where the line's string and knots lie. Pixels, y downwards. Pure. */

/** The string's height above the row's top, and how far the place in hand pulls it down. */
const restY = 16;
const pullY = 4;
const sagY = 9;

/** The middles of `count` knots on a row `widthPx` wide with `edgePx` room at both sides: at the left of equal fields, as their words stand. */
export function knotXs(count: number, widthPx: number, edgePx: number): number[] {
	return Array.from({ length: count }, (_, index) => edgePx + 6 + (index * (widthPx - 2 * edgePx)) / count);
}

/** The height of a knot: the one in hand is pulled down by its plumb. */
export function knotY(isPlace: boolean): number {
	return isPlace ? restY + pullY : restY;
}

/**
 * The string's path over the whole width. Taut: straight from end to end, or bent at the place in hand.
 * Slack: hanging a little between each two knots.
 */
export function stringPath(xs: readonly number[], widthPx: number, placeIndex: number | null, isTaut: boolean): string {
	if (isTaut) {
		const placeX = placeIndex === null ? undefined : xs[placeIndex];
		return placeX === undefined ? `M0 ${restY}H${widthPx}` : `M0 ${restY}L${round(placeX)} ${restY + pullY}L${widthPx} ${restY}`;
	}
	const stops = [0, ...xs, widthPx];
	const yAt = (index: number) => knotY(placeIndex !== null && index === placeIndex + 1);
	return stops.slice(1).reduce((path, x, step) => {
		const from = stops[step] ?? 0;
		const sag = Math.min(sagY, (x - from) / 8);
		return `${path}Q${round((from + x) / 2)} ${round(Math.max(yAt(step), yAt(step + 1)) + 2 * sag)} ${round(x)} ${yAt(step + 1)}`;
	}, `M0 ${restY}`);
}

function round(value: number): number {
	return Math.round(value * 100) / 100;
}
