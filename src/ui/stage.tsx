import { Canvas, useFrame, useThree } from '@react-three/fiber';
import { type ReactNode, type RefObject, useEffect, useImperativeHandle, useLayoutEffect, useMemo, useRef, useState } from 'react';
import { type Camera, type OrthographicCamera, Vector3 } from 'three';
import { OrbitControls } from 'three/addons/controls/OrbitControls.js';
import type { StageAnchor } from './stage-anchor.ts';
import { AnchorMover } from './stage-anchors.tsx';
import { box3Of, firstDirection, placeCamera, type View, viewBetween, viewOf } from './stage-camera.ts';
import type { ViewBox, ViewCommands } from './view-commands.ts';

/** Where a press fell: pixels from the picture's upper left corner, and the camera it was seen by. */
export interface StagePress {
	readonly x: number;
	readonly y: number;
	readonly width: number;
	readonly height: number;
	readonly isCoarse: boolean;
	readonly camera: Camera;
}

interface StageProps {
	/** What a screen reader says of the picture. */
	label: string;
	/** The scene's box in its own metres; a new one is shown whole. */
	bounds: ViewBox;
	children: ReactNode;
	anchors: readonly StageAnchor[];
	/** Commands for the page; boxes in the scene's metres. */
	commands: RefObject<ViewCommands | null>;
	onPress: (press: StagePress) => void;
	/** The graphics were taken away and did not come back: the page shows the plan instead. */
	onLost: () => void;
	/** Stands in the lower right corner: what the lines are drawn by. */
	note: string;
}

const moveMs = 170;
const turnStepRad = Math.PI / 24;

/**
 * The 3D picture: one canvas, drawn only when something changed, the same scale everywhere in it (no perspective), Z up.
 * Drag turns, two fingers or the right button shift, wheel and pinch go nearer; with the keyboard arrows turn, + and − go nearer.
 */
export function Stage({ label, bounds, children, anchors, commands, onPress, onLost, note }: StageProps) {
	const overlay = useRef<SVGSVGElement>(null);
	const north = useRef<SVGGElement>(null);
	const [isLost, setLost] = useState(false);
	return (
		<div className="absolute inset-0 overflow-hidden rounded-corner">
			<Canvas
				orthographic
				flat
				frameloop="demand"
				dpr={[1, 2]}
				gl={{ antialias: true, alpha: true, powerPreference: 'default' }}
				onCreated={({ gl }) => {
					gl.setClearColor(0x000000, 0);
					const canvas = gl.domElement;
					canvas.addEventListener('webglcontextlost', (event) => {
						// Without this the browser never gives the context back.
						event.preventDefault();
						setLost(true);
					});
					canvas.addEventListener('webglcontextrestored', () => setLost(false));
				}}
			>
				<StageView bounds={bounds} label={label} commands={commands} onPress={onPress} />
				<AnchorMover anchors={anchors} overlay={overlay} north={north} />
				{children}
			</Canvas>
			<svg ref={overlay} className="pointer-events-none absolute inset-0 size-full" aria-hidden="true">
				{anchors.map((anchor) => (
					<g key={anchor.key} visibility="hidden">
						{anchor.kind === 'ring' ? (
							<>
								<circle r={14} className="string-edge" />
								<circle r={14} className="string-core" />
							</>
						) : anchor.kind === 'bubble' ? (
							<>
								<circle r={12} className="fill-sheet stroke-ink" />
								<text y={5} textAnchor="middle" className="fill-ink text-small">
									{anchor.text}
								</text>
							</>
						) : (
							<>
								<path d="M-16 0H-4" className="stroke-second" />
								<text x={-20} y={5} textAnchor="end" className="fill-second stroke-sheet text-small [paint-order:stroke]" strokeWidth={4}>
									{anchor.text}
								</text>
							</>
						)}
					</g>
				))}
			</svg>
			<svg className="pointer-events-none absolute bottom-2 left-2" width={64} height={52} viewBox="-26 -26 64 52" aria-hidden="true">
				<g ref={north}>
					<path d="M-6 14L0 -15L6 14L0 8Z" className="fill-ink" />
				</g>
				<text x={21} y={6} className="fill-ink text-small">
					N
				</text>
			</svg>
			<span className="pointer-events-none absolute right-3 bottom-2 text-second text-small">{note}</span>
			{isLost && <Lost onLost={onLost} />}
		</div>
	);
}

/** Waits a moment for the graphics to come back (a tablet that slept gives them back), then hands over to the plan. */
function Lost({ onLost }: { onLost: () => void }) {
	useEffect(() => {
		const timer = setTimeout(onLost, 3000);
		return () => clearTimeout(timer);
	}, [onLost]);
	return (
		<p className="absolute inset-x-4 top-1/2 text-center text-second">The graphics were taken away by the device. Waiting for them …</p>
	);
}

function StageView({ bounds, label, commands, onPress }: Pick<StageProps, 'bounds' | 'label' | 'commands' | 'onPress'>) {
	const camera = useThree((state) => state.camera) as OrthographicCamera;
	const canvas = useThree((state) => state.gl.domElement);
	const invalidate = useThree((state) => state.invalidate);
	const get = useThree((state) => state.get);
	const scene = useMemo(() => box3Of(bounds), [bounds]);
	const move = useRef<{ from: View; to: View; startedMs: number } | null>(null);

	const controls = useMemo(() => {
		camera.up.set(0, 0, 1);
		const made = new OrbitControls(camera);
		made.enableDamping = false;
		made.zoomToCursor = true;
		made.minZoom = 0.5;
		made.maxZoom = 4000;
		return made;
	}, [camera]);

	useEffect(() => {
		const changed = () => invalidate();
		controls.connect(canvas);
		controls.addEventListener('change', changed);
		return () => {
			controls.removeEventListener('change', changed);
			controls.disconnect();
		};
	}, [controls, canvas, invalidate]);

	const go = useMemo(() => {
		const present = (): View => ({
			target: controls.target.clone(),
			direction: controls.target.clone().sub(camera.position).normalize(),
			zoom: camera.zoom,
		});
		return {
			to(view: View, isAtOnce: boolean): void {
				const isStill = isAtOnce || window.matchMedia('(prefers-reduced-motion: reduce)').matches;
				move.current = { from: isStill ? view : present(), to: view, startedMs: isStill ? Number.NEGATIVE_INFINITY : performance.now() };
				invalidate();
			},
			direction: (): Vector3 => present().direction,
		};
	}, [camera, controls, invalidate]);

	useFrame(() => {
		if (move.current === null) return;
		const { from, to, startedMs } = move.current;
		const share = Math.min(1, (performance.now() - startedMs) / moveMs);
		const view = share === 1 ? to : viewBetween(from, to, share);
		controls.target.copy(view.target);
		placeCamera(camera, view, scene);
		controls.update();
		if (share === 1) move.current = null;
		else invalidate();
	}, -1);

	// A new scene is shown whole; a new size keeps what is looked at.
	useLayoutEffect(() => {
		go.to(viewOf(scene, firstDirection, get().size), true);
	}, [scene, go, get]);

	useImperativeHandle(
		commands,
		() => ({
			frame: (box) => go.to(viewOf(box3Of(box), go.direction(), get().size, 1.4), false),
			whole: () => go.to(viewOf(scene, firstDirection, get().size), false),
			toEye: () => go.direction().negate().toArray(),
		}),
		[go, scene, get],
	);

	useEffect(() => {
		canvas.setAttribute('tabindex', '0');
		canvas.setAttribute('role', 'img');
		canvas.setAttribute('aria-label', label);
		let down: { x: number; y: number } | null = null;
		const pressed = (event: PointerEvent): void => {
			down = event.isPrimary && event.button === 0 ? { x: event.clientX, y: event.clientY } : null;
		};
		const released = (event: PointerEvent): void => {
			const isCoarse = event.pointerType !== 'mouse';
			if (down === null || Math.hypot(event.clientX - down.x, event.clientY - down.y) > (isCoarse ? 9 : 4)) return;
			const at = canvas.getBoundingClientRect();
			onPress({ x: event.clientX - at.left, y: event.clientY - at.top, width: at.width, height: at.height, isCoarse, camera });
		};
		const typed = (event: KeyboardEvent): void => {
			const turn = { ArrowLeft: [1, 0], ArrowRight: [-1, 0], ArrowUp: [0, 1], ArrowDown: [0, -1] }[event.key];
			const view: View = { target: controls.target.clone(), direction: go.direction(), zoom: camera.zoom };
			if (turn !== undefined) {
				const across = new Vector3().crossVectors(view.direction, camera.up).normalize();
				view.direction.applyAxisAngle(camera.up, turn[0]! * turnStepRad);
				const tilted = view.direction.clone().applyAxisAngle(across, -turn[1]! * turnStepRad);
				// Not over the pole, where left and right change places.
				if (Math.abs(tilted.z) < 0.995) view.direction.copy(tilted);
				go.to(view, true);
			} else if (event.key === '+' || event.key === '=' || event.key === '-') {
				go.to({ ...view, zoom: view.zoom * (event.key === '-' ? 0.8 : 1.25) }, true);
			} else return;
			event.preventDefault();
			event.stopPropagation();
		};
		canvas.addEventListener('pointerdown', pressed);
		canvas.addEventListener('pointerup', released);
		canvas.addEventListener('keydown', typed);
		return () => {
			canvas.removeEventListener('pointerdown', pressed);
			canvas.removeEventListener('pointerup', released);
			canvas.removeEventListener('keydown', typed);
		};
	}, [camera, canvas, controls, go, label, onPress]);
	return null;
}
