import { type ReactNode, type RefObject, useCallback, useEffect, useImperativeHandle, useMemo, useRef, useState } from 'react';
import { useElementSize } from './element-size.ts';
import type { ViewBox, ViewCommands } from './view-commands.ts';

/** Design frame, metres, to the plan's own pixels: east to the right, north up, about the middle of the work. Independent of what is shifted. */
export interface PlanScale {
	readonly pxPerM: number;
	readonly x: (east: number) => number;
	readonly y: (north: number) => number;
}

interface PlanStageProps {
	label: string;
	/** What is shown whole; design frame, metres. */
	box: ViewBox;
	children: (scale: PlanScale) => ReactNode;
	/** Drawn over it, a layer of its own: what changes with every choice, so that thousands of glyphs are not painted again for one ring. */
	over: (scale: PlanScale) => ReactNode;
	/** Boxes in the design frame. */
	commands: RefObject<ViewCommands | null>;
	/** A press, in the plan's own pixels. */
	onPress: (press: { x: number; y: number; scale: PlanScale; isCoarse: boolean }) => void;
	/** Stands in the lower right corner. */
	note: string;
}

/** What the middle of the picture shows, and how large. */
interface PlanView {
	readonly middle: readonly [number, number];
	readonly pxPerM: number;
}

const marginPx = 22;
/** Kept free at the top for what the page lays over the picture. */
const headRoomPx = 44;

function viewOf(box: ViewBox, size: { widthPx: number; heightPx: number }): PlanView {
	const [sizeE, sizeN] = [Math.max(box.max[0] - box.min[0], 0.2), Math.max(box.max[1] - box.min[1], 0.2)];
	const room = [size.widthPx - 2 * marginPx, size.heightPx - 2 * marginPx - headRoomPx] as const;
	const pxPerM = Math.max(0.5, Math.min(room[0] / sizeE, room[1] / sizeN));
	return { middle: [(box.min[0] + box.max[0]) / 2, (box.min[1] + box.max[1]) / 2 + headRoomPx / 2 / pxPerM], pxPerM };
}

/** The plan: drag or two fingers shift, wheel and pinch go nearer, arrows and + − do the same from the keyboard. Plain SVG, so it needs no graphics. */
export function PlanStage({ label, box, children, over, commands, onPress, note }: PlanStageProps) {
	const frame = useRef<HTMLDivElement>(null);
	const size = useElementSize(frame, { widthPx: 518, heightPx: 396 });
	/** Null: the whole, at whatever size the picture has. */
	const [moved, setMoved] = useState<PlanView | null>(null);
	const whole = useMemo(() => viewOf(box, size), [box, size]);
	const view = moved ?? whole;

	useImperativeHandle(commands, () => ({ frame: (asked) => setMoved(viewOf(asked, size)), whole: () => setMoved(null) }), [size]);

	const scale = useMemo<PlanScale>(() => {
		const [east, north] = [(box.min[0] + box.max[0]) / 2, (box.min[1] + box.max[1]) / 2];
		return { pxPerM: view.pxPerM, x: (e) => (e - east) * view.pxPerM, y: (n) => (north - n) * view.pxPerM };
	}, [box, view.pxPerM]);
	const shiftX = size.widthPx / 2 - scale.x(view.middle[0]);
	const shiftY = size.heightPx / 2 - scale.y(view.middle[1]);
	const drawing = useMemo(() => children(scale), [children, scale]);
	const drawingOver = useMemo(() => over(scale), [over, scale]);
	const shiftTo = `translate(${shiftX.toFixed(1)} ${shiftY.toFixed(1)})`;

	const shift = useCallback(
		(xPx: number, yPx: number) =>
			setMoved((before) => {
				const { middle, pxPerM } = before ?? whole;
				return { middle: [middle[0] - xPx / pxPerM, middle[1] + yPx / pxPerM], pxPerM };
			}),
		[whole],
	);
	/** Nearer or further about a place that stays under the finger; pixels from the picture's middle. */
	const zoom = useCallback(
		(factor: number, xPx: number, yPx: number) =>
			setMoved((before) => {
				const { middle, pxPerM } = before ?? whole;
				const next = Math.max(0.5, Math.min(4000, pxPerM * factor));
				const share = 1 / pxPerM - 1 / next;
				return { middle: [middle[0] + xPx * share, middle[1] - yPx * share], pxPerM: next };
			}),
		[whole],
	);

	useEffect(() => {
		const element = frame.current;
		if (element === null) return;
		// React's own wheel listener is passive and could not keep the page from scrolling.
		const wheel = (event: WheelEvent): void => {
			event.preventDefault();
			const at = element.getBoundingClientRect();
			zoom(Math.exp(-event.deltaY * 0.0015), event.clientX - at.left - at.width / 2, event.clientY - at.top - at.height / 2);
		};
		element.addEventListener('wheel', wheel, { passive: false });
		// Moved by arrows, + and −, as a map is, so the keyboard must reach it.
		element.setAttribute('tabindex', '0');
		return () => element.removeEventListener('wheel', wheel);
	}, [zoom]);

	const fingers = useRef(new Map<number, { x: number; y: number }>());
	const travelPx = useRef(0);
	return (
		<div
			ref={frame}
			role="img"
			aria-label={label}
			className="absolute inset-0 touch-none overflow-hidden rounded-corner"
			onPointerDown={(event) => {
				event.currentTarget.setPointerCapture(event.pointerId);
				if (fingers.current.size === 0) travelPx.current = 0;
				fingers.current.set(event.pointerId, { x: event.clientX, y: event.clientY });
			}}
			onPointerMove={(event) => {
				const finger = fingers.current.get(event.pointerId);
				if (finger === undefined) return;
				const [dx, dy] = [event.clientX - finger.x, event.clientY - finger.y];
				const other = [...fingers.current].find(([id]) => id !== event.pointerId)?.[1];
				travelPx.current += Math.hypot(dx, dy) + (other ? 100 : 0);
				fingers.current.set(event.pointerId, { x: event.clientX, y: event.clientY });
				if (travelPx.current < 5) return;
				if (other === undefined) return shift(dx, dy);
				const at = event.currentTarget.getBoundingClientRect();
				const before = Math.hypot(finger.x - other.x, finger.y - other.y);
				const after = Math.hypot(event.clientX - other.x, event.clientY - other.y);
				zoom(
					after / Math.max(before, 1),
					(event.clientX + other.x) / 2 - at.left - at.width / 2,
					(event.clientY + other.y) / 2 - at.top - at.height / 2,
				);
				shift(dx / 2, dy / 2);
			}}
			onPointerUp={(event) => {
				fingers.current.delete(event.pointerId);
				if (travelPx.current >= 5) return;
				const at = event.currentTarget.getBoundingClientRect();
				onPress({
					x: event.clientX - at.left - shiftX,
					y: event.clientY - at.top - shiftY,
					scale,
					isCoarse: event.pointerType !== 'mouse',
				});
			}}
			onPointerCancel={(event) => fingers.current.delete(event.pointerId)}
			onKeyDown={(event) => {
				const step = { ArrowLeft: [40, 0], ArrowRight: [-40, 0], ArrowUp: [0, 40], ArrowDown: [0, -40] }[event.key];
				if (step !== undefined) shift(step[0]!, step[1]!);
				else if (event.key === '+' || event.key === '=') zoom(1.25, 0, 0);
				else if (event.key === '-') zoom(0.8, 0, 0);
				else return;
				event.preventDefault();
				event.stopPropagation();
			}}
		>
			<svg width={size.widthPx} height={size.heightPx} className="absolute inset-0 will-change-transform" aria-hidden="true">
				<g transform={shiftTo}>{drawing}</g>
			</svg>
			<svg width={size.widthPx} height={size.heightPx} className="absolute inset-0 will-change-transform" aria-hidden="true">
				<g transform={shiftTo}>{drawingOver}</g>
				<g transform={`translate(34 ${size.heightPx - 34})`}>
					<path d="M-6 14L0 -15L6 14L0 8Z" className="fill-ink" />
					<text x={15} y={6} className="fill-ink text-small">
						N
					</text>
				</g>
			</svg>
			<span className="pointer-events-none absolute right-3 bottom-2 text-second text-small">{note}</span>
		</div>
	);
}
