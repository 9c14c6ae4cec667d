import type { RevisionDetail } from '#shared/model/contract.ts';
import type { StageAnchor } from '#src/ui/stage-anchor.ts';
import { boxAround, type ViewBox } from '#src/ui/view-commands.ts';

type GridAxis = RevisionDetail['reading']['grid'][number];
type Storey = RevisionDetail['reading']['storeys'][number];
type Plan = readonly [number, number];

/** A grid axis as it is drawn: from one side of the work to the other, with a bubble beyond it. Design frame, metres. */
export interface DrawnAxis {
	readonly tag: string;
	readonly from: Plan;
	readonly to: Plan;
	/** The bubble's middle: beyond the end that lies nearer to the viewer's side, west and south. */
	readonly bubble: Plan;
}

/**
 * The axes, cut to the work with a margin. An axis that runs past the box is shortened to it, one that stops short is drawn as far as it goes.
 * Two axes of one tag and direction are drawn once.
 */
export function drawnAxes(grid: readonly GridAxis[], box: ViewBox): DrawnAxis[] {
	const sizeM = Math.max(box.max[0] - box.min[0], box.max[1] - box.min[1], 1);
	const marginM = sizeM * 0.045;
	const seen = new Set<string>();
	const drawn: DrawnAxis[] = [];
	for (const axis of grid) {
		const [first, last] = [axis.points[0], axis.points.at(-1)];
		const key = `${axis.direction} ${axis.tag}`;
		if (first === undefined || last === undefined || axis.points.length < 2 || seen.has(key)) continue;
		const cut = cutToBox(first, last, box, marginM);
		if (cut === null) continue;
		seen.add(key);
		// The end to the south, or else to the west, carries the bubble: so all of one direction stand in a row.
		const [near, far] = southWest(cut.from) <= southWest(cut.to) ? [cut.from, cut.to] : [cut.to, cut.from];
		const length = Math.hypot(far[0] - near[0], far[1] - near[1]);
		const beyond = sizeM * 0.05;
		drawn.push({
			tag: axis.tag,
			from: near,
			to: far,
			bubble: [near[0] - ((far[0] - near[0]) / length) * beyond, near[1] - ((far[1] - near[1]) / length) * beyond],
		});
	}
	return drawn;
}

/** Small to the south and west; the south counts a little more, so that a diagonal is never undecided. */
function southWest([east, north]: Plan): number {
	return east + north * 1.001;
}

/** The part of a line within the box and its margin (Liang & Barsky 1984); null where it misses the box. */
function cutToBox(from: Plan, to: Plan, box: ViewBox, marginM: number): { from: Plan; to: Plan } | null {
	const direction: Plan = [to[0] - from[0], to[1] - from[1]];
	if (Math.hypot(...direction) === 0) return null;
	let [start, end] = [0, 1];
	for (let part = 0; part < 2; part++) {
		const [low, high] = [box.min[part]! - marginM, box.max[part]! + marginM];
		const [at, step] = [from[part]!, direction[part]!];
		if (step === 0) {
			if (at < low || at > high) return null;
			continue;
		}
		const [enter, leave] = step > 0 ? [(low - at) / step, (high - at) / step] : [(high - at) / step, (low - at) / step];
		start = Math.max(start, enter);
		end = Math.min(end, leave);
	}
	if (start >= end) return null;
	const at = (share: number): Plan => [from[0] + direction[0] * share, from[1] + direction[1] * share];
	return { from: at(start), to: at(end) };
}

/** The work with its bubbles: what "whole" shows. Design frame, metres. */
export function withBubbles(box: ViewBox, axes: readonly DrawnAxis[]): ViewBox {
	const bubbles = axes.map(({ bubble }) => ({ min: [...bubble, box.min[2]] as const, max: [...bubble, box.min[2]] as const }));
	return boxAround([box, ...bubbles]) ?? box;
}

/** Bubbles and levels to hang over the 3D picture. Places come out in the scene's frame, that is less `originM`. */
export function frameAnchors(
	axes: readonly DrawnAxis[],
	storeys: readonly Storey[],
	box: ViewBox,
	originM: readonly [number, number, number],
): StageAnchor[] {
	const floorM = box.min[2];
	const bubbles = axes.map(
		(axis): StageAnchor => ({
			key: `axis ${axis.tag} ${axis.bubble.join()}`,
			kind: 'bubble',
			place: [axis.bubble[0] - originM[0], axis.bubble[1] - originM[1], floorM - originM[2]],
			text: axis.tag,
		}),
	);
	const levels = storeys
		.filter((storey) => storey.elevationM !== null && storey.elevationM >= box.min[2] - 0.5 && storey.elevationM <= box.max[2] + 0.5)
		.map(
			(storey): StageAnchor => ({
				key: `level ${storey.name}`,
				kind: 'level',
				// The north-west corner: the left end of the first view.
				place: [box.min[0] - originM[0], box.max[1] - originM[1], storey.elevationM! - originM[2]],
				text: `${levelText(storey.elevationM!)} ${storey.name}`,
			}),
		);
	return [...bubbles, ...levels];
}

/** "+4.500", "±0.000", "−1.200": metres in the design frame, as levels are written on drawings. */
export function levelText(elevationM: number): string {
	const text = Math.abs(elevationM).toFixed(3);
	return `${Number(text) === 0 ? '±' : elevationM < 0 ? '\u2212' : '+'}${text}`;
}
