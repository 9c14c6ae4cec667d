/** A box in metres, in whatever frame the view draws. */
export interface ViewBox {
	readonly min: readonly [number, number, number];
	readonly max: readonly [number, number, number];
}

/** What a page may ask of the view, 3D or plan. Boxes in the design frame, metres. */
export interface ViewCommands {
	/** Fills the view with this box. */
	frame(box: ViewBox): void;
	/** Shows everything, from the first direction. */
	whole(): void;
	/** Unit vector from the scene to the eye, where there is one eye: the plan has none. */
	toEye?(): readonly [number, number, number];
}

/** The box about several; null without any. */
export function boxAround(boxes: Iterable<ViewBox>): ViewBox | null {
	const min: [number, number, number] = [Infinity, Infinity, Infinity];
	const max: [number, number, number] = [-Infinity, -Infinity, -Infinity];
	for (const box of boxes) {
		for (let axis = 0; axis < 3; axis++) {
			min[axis] = Math.min(min[axis]!, box.min[axis]!);
			max[axis] = Math.max(max[axis]!, box.max[axis]!);
		}
	}
	return min[0] <= max[0] ? { min, max } : null;
}

/** The same box with a margin on every side, metres. */
export function grown(box: ViewBox, marginM: number): ViewBox {
	return {
		min: [box.min[0] - marginM, box.min[1] - marginM, box.min[2] - marginM],
		max: [box.max[0] + marginM, box.max[1] + marginM, box.max[2] + marginM],
	};
}
