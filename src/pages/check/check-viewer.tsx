import { useQuery } from '@tanstack/react-query';
import { lazy, type RefObject, Suspense, useCallback, useEffect, useMemo, useReducer, useRef, useState } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import { exaggerationOf, nearestMark } from '#src/features/check/deviation-mark.ts';
import { ChosenMark, DeviationPlan } from '#src/features/check/deviation-plan.tsx';
import { drawnAxes, withBubbles } from '#src/features/model/grid-frame.ts';
import { ChosenFootprint, ModelPlan } from '#src/features/model/model-plan.tsx';
import { api } from '#src/lib/api.ts';
import { Chip, PressChip, Segmented } from '#src/ui/chip.tsx';
import { hasWebGl2 } from '#src/ui/has-webgl.ts';
import { type PlanScale, PlanStage } from '#src/ui/plan-stage.tsx';
import { boxAround, grown, type ViewBox, type ViewCommands } from '#src/ui/view-commands.ts';
import { type CheckView, worstMarkOf } from './use-check-view.ts';

/** Everything of three.js lies behind this: it comes when a model is first looked at. */
const CheckScene = lazy(() => import('./check-scene.tsx'));

interface CheckViewerProps {
	check: CheckDetail;
	siteId: string;
	view: CheckView;
	/** away: kept, but not seen (a phone that shows the table). */
	mode: 'model' | 'plan' | 'away';
	/** Without it the choice between the two stands elsewhere. */
	onMode?: (mode: 'model' | 'plan') => void;
	commands: RefObject<ViewCommands | null>;
	/** Put here: frames what is chosen, at the next drawing. */
	frameChosen: RefObject<(checkpointId: string) => void>;
	/** Put here: takes the chosen element out of the view. */
	putAwayChosen: RefObject<() => void>;
}

const noElements: never[] = [];

/** How near a press must fall, pixels. */
export const reachPx = { fine: 14, coarse: 26 };

/** Model and plan of a check: the same marks, the same choice, the same acts. The plan stands in while the model is on its way, and where there is no 3D. */
export function CheckViewer({ check, siteId, view, mode, onMode, commands, frameChosen, putAwayChosen }: CheckViewerProps) {
	const { revisionId } = check.revision;
	const input = { siteId, revisionId };
	// A revision never changes once it is read.
	const forever = { staleTime: Number.POSITIVE_INFINITY };
	const revision = useQuery({ ...api.model.revision.queryOptions({ input }), ...forever });
	const modelElements = useQuery({ ...api.model.elements.queryOptions({ input }), ...forever });
	const elements = modelElements.data ?? noElements;

	const [hasGraphics] = useState(hasWebGl2);
	const [fault, setFault] = useState<string | null>(null);
	const [isReady, setReady] = useState(false);
	const [wasAsked, setWasAsked] = useState(mode === 'model');
	useEffect(() => {
		if (mode === 'model') setWasAsked(true);
	}, [mode]);
	const may3d = hasGraphics && fault === null;
	const is3d = mode === 'model' && may3d && isReady;

	const [isOnlyThese, setOnlyThese] = useState(false);
	const [putAway, setPutAway] = useState<ReadonlySet<number>>(new Set());
	/** What stood before the chosen one when it was framed; back with the next choice. */
	const [inTheWay, setInTheWay] = useState<{ chosenId: string | null; entities: readonly number[] }>({ chosenId: null, entities: [] });
	const marks = isOnlyThese ? view.drawnMarks.onlyThese : view.drawnMarks.all;
	const allMarks = view.drawnMarks.all;
	const shownEntities = useMemo(() => new Set(view.shown.map((group) => group.element.entityNumber)), [view.shown]);
	const { storey } = view;
	const hidden = useMemo(() => {
		const away = new Set([...putAway, ...(inTheWay.chosenId === view.chosenId ? inTheWay.entities : [])]);
		for (const { entityNumber, storey: itsStorey } of elements) {
			if ((isOnlyThese && !shownEntities.has(entityNumber)) || (storey !== null && itsStorey !== storey)) away.add(entityNumber);
		}
		return away;
	}, [elements, isOnlyThese, shownEntities, putAway, inTheWay, view.chosenId, storey]);

	const box = useMemo((): ViewBox => {
		const boxes = elements.flatMap((element) => (element.boxM === null ? [] : [element.boxM]));
		const places = check.deviations.map(({ place }) => ({ min: place, max: place }));
		return boxAround(boxes) ?? grown(boxAround(places) ?? { min: [0, 0, 0], max: [10, 10, 3] }, 0.5);
	}, [elements, check.deviations]);
	const axes = useMemo(() => drawnAxes(revision.data?.reading.grid ?? [], box), [revision.data, box]);
	const planBox = useMemo(() => withBubbles(box, axes), [box, axes]);
	const times = useMemo(() => exaggerationOf(allMarks, Math.max(box.max[0] - box.min[0], box.max[1] - box.min[1])), [allMarks, box]);
	const chosenEntity = view.chosenElement?.entityNumber ?? null;

	const { chosen, chosenId } = view;
	const frame = useCallback(() => {
		const element = elements.find((each) => each.entityNumber === chosenEntity);
		if (chosen === null) {
			// A derived result has no place of its own: its element.
			if (element?.boxM != null) commands.current?.frame(grown(element.boxM, 0.75));
			return;
		}
		const near = grown({ min: chosen.place, max: chosen.place }, 0.75);
		// A whole slab would frame the whole site: then the place and its surroundings.
		const isSmall = element?.boxM != null && Math.max(...[0, 1, 2].map((axis) => element.boxM!.max[axis]! - element.boxM!.min[axis]!)) < 9;
		commands.current?.frame(isSmall ? (boxAround([near, element.boxM!]) ?? near) : grown(near, 2));
	}, [chosen, chosenEntity, elements, commands]);
	// Asked for together with a choice, it waits until that choice is the page's.
	const wanted = useRef<string | null>(null);
	const [, askFrame] = useReducer((asked: number) => asked + 1, 0);
	useEffect(() => {
		frameChosen.current = (checkpointId) => {
			wanted.current = checkpointId;
			askFrame();
		};
	}, [frameChosen]);
	useEffect(() => {
		putAwayChosen.current = () => chosenEntity !== null && setPutAway((before) => new Set([...before, chosenEntity]));
	}, [putAwayChosen, chosenEntity]);
	useEffect(() => {
		if (wanted.current === null || wanted.current !== chosenId) return;
		wanted.current = null;
		frame();
	});

	const { choose } = view;
	const pickElement = useCallback(
		(entityNumber: number) => {
			const group = view.groups.find(({ element }) => element.entityNumber === entityNumber);
			const worst = group && (worstMarkOf(marks, group.key)?.checkpointId ?? group.rows[0]?.checkpointId);
			if (worst !== undefined) choose(worst);
		},
		[view.groups, marks, choose],
	);
	const pressPlan = useCallback(
		({ x, y, scale, isCoarse }: { x: number; y: number; scale: PlanScale; isCoarse: boolean }) => {
			const placesPx = marks.flatMap(({ place }) => [scale.x(place[0]), scale.y(place[1])]);
			const mark = nearestMark(placesPx, x, y, isCoarse ? reachPx.coarse : reachPx.fine);
			if (mark !== null) choose(marks[mark]!.checkpointId);
		},
		[marks, choose],
	);
	const note = `lines \u00d7 ${times}`;
	const drawPlan = useCallback(
		(scale: PlanScale) => (
			<>
				<ModelPlan elements={elements} hidden={hidden} axes={axes} scale={scale} />
				<DeviationPlan marks={marks} times={times} scale={scale} />
			</>
		),
		[elements, hidden, axes, marks, times],
	);
	const chosenModelElement = elements.find((element) => element.entityNumber === chosenEntity);
	const chosenMark = marks.find((mark) => mark.checkpointId === view.chosenId);
	const drawOverPlan = useCallback(
		(scale: PlanScale) => (
			<>
				{chosenModelElement && <ChosenFootprint element={chosenModelElement} scale={scale} />}
				{chosenMark && <ChosenMark mark={chosenMark} scale={scale} />}
			</>
		),
		[chosenModelElement, chosenMark],
	);
	const clearTheWay = useCallback((entities: readonly number[]) => setInTheWay({ chosenId: view.chosenId, entities }), [view.chosenId]);
	const lost = useCallback(
		() => setFault('The device took the graphics away, so the plan takes the model’s place. Load the page again for the model.'),
		[],
	);
	const failed = useCallback((why: string) => setFault(why), []);
	const ready = useCallback(() => setReady(true), []);

	const whyPlan = hasGraphics ? fault : 'This browser draws no 3D here, so the plan takes the model’s place.';
	const isOnItsWay = whyPlan === null && mode === 'model' && !isReady;
	const label = `${marks.length} checkpoints${is3d ? ' on the model' : ' on the plan'}; the table says the same in words.`;
	return (
		<div className="sheet flex h-full min-h-80 flex-col overflow-hidden">
			<div className="relative min-h-0 flex-1">
				{may3d && wasAsked && (
					<div className={is3d ? '' : 'invisible'}>
						<Suspense fallback={null}>
							<CheckScene
								siteId={siteId}
								revisionId={revisionId}
								label={label}
								box={box}
								axes={axes}
								storeys={revision.data?.reading.storeys ?? noElements}
								marks={marks}
								chosenId={view.chosenId}
								chosenEntity={chosenEntity}
								hidden={hidden}
								times={times}
								note={note}
								commands={is3d ? commands : noCommands}
								onChoose={choose}
								onPickElement={pickElement}
								onInTheWay={clearTheWay}
								onReady={ready}
								onFailed={failed}
								onLost={lost}
							/>
						</Suspense>
					</div>
				)}
				{!is3d && mode !== 'away' && (
					<PlanStage label={label} box={planBox} over={drawOverPlan} commands={commands} onPress={pressPlan} note={note}>
						{drawPlan}
					</PlanStage>
				)}
				<div className="pointer-events-none absolute inset-x-2.5 top-2.5 flex flex-wrap justify-between gap-1.5 [&>*]:pointer-events-auto">
					{onMode && may3d ? (
						<Segmented
							legend="View"
							value={mode === 'plan' ? 'plan' : 'model'}
							onChange={onMode}
							options={[
								{ value: 'model', label: 'Model' },
								{ value: 'plan', label: 'Plan' },
							]}
						/>
					) : (
						<span />
					)}
					<div className="flex flex-wrap justify-end gap-1.5">
						<Chip isOn={isOnlyThese} onChange={setOnlyThese} title="Draw only the elements the table shows">
							Only these
						</Chip>
						<PressChip
							onPress={() => {
								setOnlyThese(false);
								setPutAway(new Set());
								setInTheWay({ chosenId: null, entities: [] });
								commands.current?.whole();
							}}
							title="Everything back, seen whole"
						>
							Whole
						</PressChip>
					</div>
					{isOnItsWay && (
						<p role="status" className="pointer-events-none m-0 w-fit rounded-corner bg-sheet px-1.5 text-small text-second">
							The model is on its way; the plan meanwhile.
						</p>
					)}
				</div>
			</div>
			{whyPlan !== null && (
				<p role="status" className="m-0 border-t border-t-hair px-3 py-1.5 text-small text-second">
					{whyPlan}
				</p>
			)}
		</div>
	);
}

const noCommands: RefObject<ViewCommands | null> = { current: null };
