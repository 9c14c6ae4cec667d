/** Something flat that hangs on a place of the scene: drawn over it in SVG, so that its text is sharp and its colours are CSS. */
export interface StageAnchor {
	readonly key: string;
	/** The scene's frame, metres. */
	readonly place: readonly [number, number, number];
	/** bubble: a grid axis's tag in a circle. level: a height with its words. ring: what is chosen. */
	readonly kind: 'bubble' | 'level' | 'ring';
	readonly text: string;
}

/** How far apart two texts must lie to be told apart, pixels. */
const leastApartPx = { bubble: 27, level: 19, ring: 0 } as const;

/** Which of the anchors are drawn: an earlier one hides a later one of its kind that would lie on it. Places in pixels. */
export function clearAnchors(anchors: readonly StageAnchor[], placesPx: readonly (readonly [number, number])[]): boolean[] {
	const drawn: boolean[] = [];
	anchors.forEach((anchor, i) => {
		const apartPx = leastApartPx[anchor.kind];
		const [x, y] = placesPx[i]!;
		drawn.push(
			!anchors.some((other, j) => {
				if (j >= i || other.kind !== anchor.kind || !drawn[j]) return false;
				const [otherX, otherY] = placesPx[j]!;
				return anchor.kind === 'level' ? Math.abs(otherY - y) < apartPx : Math.hypot(otherX - x, otherY - y) < apartPx;
			}),
		);
	});
	return drawn;
}
