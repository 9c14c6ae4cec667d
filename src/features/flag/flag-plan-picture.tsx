import type { FlagPlan } from '#shared/flag/contract.ts';

interface FlagPlanPictureProps {
	plan: FlagPlan;
	/** Which way it is off, east and north; null: no way in plan. Its length says nothing. */
	way: readonly [number, number] | null;
	/** "Where C/3 stands; it is off to the east". */
	label: string;
}

const [widthPx, heightPx] = [92, 66];
/** Room for the arrow of one that stands at the edge. */
const marginPx = 13;
const arrowPx = 21;
/** So small that a column would be lost in a long building. */
const smallestPx = 7;

/** The element among those of its kind, and an arrow the way it is off. North is up. */
export function FlagPlanPicture({ plan, way, label }: FlagPlanPictureProps) {
	const boxes = [plan.own, ...plan.others];
	const middle = (box: FlagPlan['own']) => [(box[0] + box[2]) / 2, (box[1] + box[3]) / 2] as const;
	const [west, south] = [Math.min(...boxes.map((box) => box[0])), Math.min(...boxes.map((box) => box[1]))];
	const [east, north] = [Math.max(...boxes.map((box) => box[2])), Math.max(...boxes.map((box) => box[3]))];
	const pxPerM = Math.min((widthPx - 2 * marginPx) / Math.max(east - west, 0.5), (heightPx - 2 * marginPx) / Math.max(north - south, 0.5));
	const x = (e: number): number => widthPx / 2 + (e - (east + west) / 2) * pxPerM;
	const y = (n: number): number => heightPx / 2 - (n - (north + south) / 2) * pxPerM;
	const shape = (box: FlagPlan['own']) => {
		const [w, h] = [Math.max((box[2] - box[0]) * pxPerM, smallestPx), Math.max((box[3] - box[1]) * pxPerM, smallestPx)];
		return { x: x(middle(box)[0]) - w / 2, y: y(middle(box)[1]) - h / 2, width: w, height: h };
	};
	const [fromX, fromY] = [x(middle(plan.own)[0]), y(middle(plan.own)[1])];
	const turn = way === null || Math.hypot(...way) === 0 ? null : (-Math.atan2(way[1], way[0]) * 180) / Math.PI;
	return (
		<svg
			width={widthPx}
			height={heightPx}
			viewBox={`0 0 ${widthPx} ${heightPx}`}
			role="img"
			aria-label={label}
			className="block shrink-0 overflow-visible"
		>
			<rect x={0.75} y={0.75} width={widthPx - 1.5} height={heightPx - 1.5} className="fill-none stroke-rule" strokeWidth={1.5} />
			{apartOnly(plan.others, plan.own, (box) => [x(middle(box)[0]), y(middle(box)[1])]).map((box) => (
				<rect key={box.join()} {...shape(box)} className="fill-band stroke-second" />
			))}
			<rect {...shape(plan.own)} className="fill-ink" />
			{turn !== null && (
				<g transform={`translate(${fromX.toFixed(1)} ${fromY.toFixed(1)}) rotate(${turn.toFixed(1)})`}>
					<path d={`M0 0H${arrowPx + 3}`} className="stroke-sheet" strokeWidth={6} />
					<path
						d={`M0 0H${arrowPx}M${arrowPx - 7} -6L${arrowPx + 2} 0L${arrowPx - 7} 6`}
						className="fill-none stroke-ink"
						strokeWidth={2.4}
					/>
				</g>
			)}
		</svg>
	);
}

/** Boxes that would be drawn upon one another, as bolts of one group, are drawn once. */
function apartOnly(
	others: FlagPlan['others'],
	own: FlagPlan['own'],
	placeOf: (box: FlagPlan['own']) => readonly [number, number],
): FlagPlan['others'] {
	const kept: FlagPlan['others'] = [];
	for (const box of others) {
		const [x, y] = placeOf(box);
		const isFree = [own, ...kept].every((one) => Math.hypot(placeOf(one)[0] - x, placeOf(one)[1] - y) > smallestPx + 1);
		if (isFree) kept.push(box);
	}
	return kept;
}
