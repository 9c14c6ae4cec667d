import { lazy, type RefObject, Suspense, useCallback, useEffect, useMemo, useState } from 'react';
import type { RevisionDetail, StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { type DeviationMark, nearestMark } from '#src/features/check/deviation-mark.ts';
import { ChosenMark, DeviationPlan } from '#src/features/check/deviation-plan.tsx';
import { drawnAxes, withBubbles } from '#src/features/model/grid-frame.ts';
import { ChosenFootprint, ModelPlan } from '#src/features/model/model-plan.tsx';
import { PressChip, Segmented } from '#src/ui/chip.tsx';
import { hasWebGl2 } from '#src/ui/has-webgl.ts';
import { type PlanScale, PlanStage } from '#src/ui/plan-stage.tsx';
import { boxAround, type ViewBox, type ViewCommands } from '#src/ui/view-commands.ts';
import type { PickedOnModel } from './revision-scene.tsx';

/** Everything of three.js lies behind this. */
const RevisionScene = lazy(() => import('./revision-scene.tsx'));

interface RevisionViewerProps {
	siteId: string;
	revision: RevisionDetail;
	elements: readonly StoredElement[];
	/** Elements that the list shows; the others are not drawn. */
	shown: readonly StoredElement[];
	/** Their checkpoints. */
	checkpoints: readonly StoredCheckpoint[];
	chosen: StoredCheckpoint | null;
	chosenElement: StoredElement | null;
	mode: 'model' | 'plan';
	onMode: (mode: 'model' | 'plan') => void;
	isPlacing: boolean;
	commands: RefObject<ViewCommands | null>;
	onChoose: (checkpointId: string) => void;
	onElement: (entityNumber: number) => void;
	onPlace: (picked: PickedOnModel) => void;
}

const noCommands: RefObject<ViewCommands | null> = { current: null };

/** Model and plan of a revision with its checkpoints: the plan stands in while the model is on its way, and where there is no 3D. */
export function RevisionViewer(props: RevisionViewerProps) {
	const { siteId, revision, elements, shown, checkpoints, chosen, chosenElement, mode, onMode, isPlacing, commands } = props;
	const { onChoose, onElement, onPlace } = props;
	const [hasGraphics] = useState(hasWebGl2);
	const [fault, setFault] = useState<string | null>(null);
	const [isReady, setReady] = useState(false);
	const [wasAsked, setWasAsked] = useState(mode === 'model');
	useEffect(() => {
		if (mode === 'model') setWasAsked(true);
	}, [mode]);
	const may3d = hasGraphics && fault === null;
	const is3d = mode === 'model' && may3d && isReady;
	const box = useMemo(
		(): ViewBox =>
			boxAround(elements.flatMap((element) => (element.boxM === null ? [] : [element.boxM]))) ?? { min: [0, 0, 0], max: [10, 10, 3] },
		[elements],
	);
	const axes = useMemo(() => drawnAxes(revision.reading.grid, box), [revision.reading.grid, box]);
	const planBox = useMemo(() => withBubbles(box, axes), [box, axes]);
	const hidden = useMemo(() => {
		const seen = new Set(shown.map(({ entityNumber }) => entityNumber));
		return new Set(elements.flatMap(({ entityNumber }) => (seen.has(entityNumber) ? [] : [entityNumber])));
	}, [elements, shown]);
	const marks = useMemo(
		() =>
			checkpoints.map(
				(checkpoint): DeviationMark => ({
					checkpointId: checkpoint.id,
					elementId: checkpoint.elementId,
					kind: checkpoint.requirement === 'left-out' ? 'none' : 'within',
					place: checkpoint.place,
					normal: checkpoint.direction,
					shiftM: null,
				}),
			),
		[checkpoints],
	);
	const chosenMark = marks.find(({ checkpointId }) => checkpointId === chosen?.id);
	const pick = useCallback(
		(picked: PickedOnModel) => (isPlacing ? onPlace(picked) : onElement(picked.entityNumber)),
		[isPlacing, onPlace, onElement],
	);
	const pressPlan = useCallback(
		({ x, y, scale, isCoarse }: { x: number; y: number; scale: PlanScale; isCoarse: boolean }) => {
			const placesPx = marks.flatMap(({ place }) => [scale.x(place[0]), scale.y(place[1])]);
			const near = nearestMark(placesPx, x, y, isCoarse ? 26 : 14);
			if (near !== null) onChoose(marks[near]!.checkpointId);
		},
		[marks, onChoose],
	);
	const drawPlan = useCallback(
		(scale: PlanScale) => (
			<>
				<ModelPlan elements={elements} hidden={hidden} axes={axes} scale={scale} />
				<DeviationPlan marks={marks} times={1} scale={scale} />
			</>
		),
		[elements, hidden, axes, marks],
	);
	const drawOver = useCallback(
		(scale: PlanScale) => (
			<>
				{chosenElement && <ChosenFootprint element={chosenElement} scale={scale} />}
				{chosenMark && <ChosenMark mark={chosenMark} scale={scale} />}
			</>
		),
		[chosenElement, chosenMark],
	);
	const failed = useCallback((why: string) => setFault(why), []);
	const ready = useCallback(() => setReady(true), []);
	const whyPlan = hasGraphics ? fault : 'This browser draws no 3D here, so the plan takes the model’s place.';
	const label = `${marks.length} checkpoints${is3d ? ' on the model' : ' on the plan'}; the table says the same in words.`;
	const note = 'rings: asked for · dashes: left out';
	return (
		<div className="sheet flex h-full min-h-80 flex-col overflow-hidden">
			<div className="relative min-h-0 flex-1">
				{may3d && wasAsked && (
					<div className={is3d ? '' : 'invisible'}>
						<Suspense fallback={null}>
							<RevisionScene
								siteId={siteId}
								revisionId={revision.revisionId}
								label={label}
								box={box}
								axes={axes}
								storeys={revision.reading.storeys}
								marks={marks}
								chosenId={chosen?.id ?? null}
								chosenEntity={chosenElement?.entityNumber ?? null}
								hidden={hidden}
								isPlacing={isPlacing}
								note={note}
								commands={is3d ? commands : noCommands}
								onChoose={onChoose}
								onPick={pick}
								onReady={ready}
								onFailed={failed}
							/>
						</Suspense>
					</div>
				)}
				{!is3d && (
					<PlanStage label={label} box={planBox} over={drawOver} commands={commands} onPress={pressPlan} note={note}>
						{drawPlan}
					</PlanStage>
				)}
				<div className="pointer-events-none absolute inset-x-2.5 top-2.5 flex flex-wrap justify-between gap-1.5 [&>*]:pointer-events-auto">
					{may3d ? (
						<Segmented
							legend="View"
							value={mode}
							onChange={onMode}
							options={[
								{ value: 'model', label: 'Model' },
								{ value: 'plan', label: 'Plan' },
							]}
						/>
					) : (
						<span />
					)}
					<PressChip onPress={() => commands.current?.whole()}>Whole</PressChip>
					{whyPlan === null && mode === 'model' && !isReady && (
						<p role="status" className="pointer-events-none m-0 w-fit rounded-corner bg-sheet px-1.5 text-small text-second">
							The model is on its way; the plan meanwhile.
						</p>
					)}
				</div>
			</div>
			{(whyPlan !== null || isPlacing) && (
				<p role="status" className="m-0 border-t border-t-hair px-3 py-1.5 text-small">
					{isPlacing
						? is3d
							? 'Press the place on the model.'
							: 'A place can be pressed on the model alone; the plan shows no faces.'
						: whyPlan}
				</p>
			)}
		</div>
	);
}
