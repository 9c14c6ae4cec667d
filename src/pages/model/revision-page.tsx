import { useSuspenseQueries } from '@tanstack/react-query';
import { type ReactNode, useMemo, useRef, useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { z } from 'zod';
import { mapScaleFinding } from '#shared/control/map-frame.ts';
import type { RevisionDetail } from '#shared/model/contract.ts';
import { AddCheckpointForm } from '#src/features/model/add-checkpoint-form.tsx';
import { CheckpointTable } from '#src/features/model/checkpoint-table.tsx';
import { ChooseBar } from '#src/features/model/choose-bar.tsx';
import { ChooseReading, scaleOptions, unitOption } from '#src/features/model/choose-reading.tsx';
import { ElementProperties } from '#src/features/model/element-properties.tsx';
import { ElementTable } from '#src/features/model/element-table.tsx';
import { FieldList } from '#src/features/model/field-list.tsx';
import { Georeference } from '#src/features/model/georeference.tsx';
import { ModelFindings } from '#src/features/model/model-findings.tsx';
import { placeToAddress, reasonsWithout, storeyOf, treeOf } from '#src/features/model/model-place.ts';
import { ModelTree } from '#src/features/model/model-tree.tsx';
import { NameAxisForm } from '#src/features/model/name-axis-form.tsx';
import { NameBar } from '#src/features/model/name-bar.tsx';
import { SaidOfReading } from '#src/features/model/said-of-reading.tsx';
import { WithoutCheckpoints } from '#src/features/model/without-checkpoints.tsx';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { PressChip, Segmented } from '#src/ui/chip.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { useIsBelow } from '#src/ui/screen-width.ts';
import { Strip } from '#src/ui/strip.tsx';
import { grown, type ViewCommands } from '#src/ui/view-commands.ts';
import type { PickedOnModel } from './revision-scene.tsx';
import { RevisionViewer } from './revision-viewer.tsx';
import { useRevisionView } from './use-revision-view.ts';

/** What one revision holds: its elements by storey and class, their checkpoints, where it lies, what was found, what is left out and why. */
export default function RevisionPage() {
	const { siteId = '', revisionId = '' } = useParams();
	const input = { siteId, revisionId };
	const [{ data: revision }, { data: elements }, { data: checkpoints }, { data: models }] = useSuspenseQueries({
		queries: [
			api.model.revision.queryOptions({ input }),
			api.model.elements.queryOptions({ input }),
			api.model.checkpoints.queryOptions({ input }),
			api.model.list.queryOptions({ input: { siteId } }),
		],
	});
	const site = useSite();
	const isPhone = useIsBelow('tablet');
	const { reading } = revision;
	const newest = models.find(({ modelId }) => modelId === revision.modelId)?.revisions.find(({ state }) => state === 'ready');
	const isNewest = newest?.revisionId === revisionId;
	const [mayChoose, mayName, mayRead] = [useMay('checkpoint.write'), useMay('mark.write') && isNewest, useMay('model.write')];
	// Where the file brings a grid, marks are made of that.
	const mayNameAxes = mayName && reading.grid.length <= (reading.choices?.axes.length ?? 0);

	const {
		isCheckpoints,
		setShow,
		place,
		setWhere,
		find,
		setFind,
		view,
		setView,
		shown,
		ofElement,
		shownCheckpoints,
		chosen,
		chosenElement,
		chooseCheckpoint,
		chooseOnlyElement,
		onEntity,
		ticked,
		tick,
		untick,
		typed,
		setTyped,
		type,
	} = useRevisionView(elements, checkpoints);
	const [pickFor, setPickFor] = useState<'checkpoint' | 'axis' | null>(null);
	const [axisFrom, setAxisFrom] = useState<PickedOnModel | null>(null);
	const pickingFor = (what: 'checkpoint' | 'axis'): void => {
		setAxisFrom(null);
		setPickFor(pickFor === what ? null : what);
		if (pickFor !== what) setView('model');
	};
	const onPicked = (place: PickedOnModel): void => {
		if (pickFor === 'axis' && axisFrom === null) setAxisFrom(place);
		else setPicked(place);
	};
	const [picked, setPicked] = useState<PickedOnModel | null>(null);
	const commands = useRef<ViewCommands | null>(null);
	const tree = useMemo(() => treeOf(elements, reading.storeys), [elements, reading.storeys]);
	const reasons = useMemo(() => reasonsWithout(reading.skipped, elements), [reading.skipped, elements]);
	const whyNone = useMemo(() => new Map(reading.skipped.map((skipped) => [skipped.entityNumber, skipped.why])), [reading.skipped]);
	const leftOut = checkpoints.filter(({ requirement }) => requirement === 'left-out').length;
	const frame = (): void => {
		if (chosen !== null) commands.current?.frame(grown({ min: chosen.place, max: chosen.place }, 2));
		else if (chosenElement?.boxM) commands.current?.frame(grown(chosenElement.boxM, 0.5));
	};
	const pickedElement = picked === null ? null : (elements.find(({ entityNumber }) => entityNumber === picked.entityNumber) ?? null);
	const without = elements.length - new Set(checkpoints.map((checkpoint) => checkpoint.elementId)).size;
	const shownOnPhone = isPhone ? (view ?? 'list') : null;

	const treeView = <ModelTree tree={tree} place={place} onPlace={(next) => setWhere(placeToAddress(next))} />;
	return (
		<>
			<Strip
				items={[
					<Link key="models" to={`/sites/${siteId}/model`} className="underline underline-offset-3">
						{revision.modelName}
					</Link>,
					`revision ${revision.number}${isNewest ? ', newest' : ''}`,
					revision.fileName,
					reading.schema,
					reading.unit,
					reading.project,
				]}
			/>
			<Headline
				title={`${revision.modelName}, revision ${revision.number}`}
				acts={
					<FieldList
						siteId={siteId}
						revisionId={revisionId}
						name={`${revision.modelName} rev ${revision.number}`}
						storeys={[...new Set(elements.flatMap(({ storey }) => (storey === '' ? [] : [storey])))]}
						whyNoMap={whyNoMap(reading)}
					/>
				}
			>
				{headlineOf(elements.length, without, checkpoints.length, leftOut)}
			</Headline>
			<Georeference reading={reading} />
			<div className="mt-3 mb-4">
				<ModelFindings findings={reading.findings} actsOf={(finding) => mayRead && isNewest && readingActs(siteId, revision, finding)} />
			</div>
			{isNewest && (
				<div className="mb-4">
					<SaidOfReading siteId={siteId} modelId={revision.modelId} revisionId={revisionId} />
				</div>
			)}
			<div className="mb-3 flex flex-wrap items-end gap-2.5">
				<Segmented
					legend="List"
					value={isCheckpoints ? 'checkpoints' : 'elements'}
					onChange={(next) => setShow(next === 'checkpoints' ? next : null)}
					options={[
						{ value: 'elements', label: `Elements ${shown.length}` },
						{ value: 'checkpoints', label: `Checkpoints ${shownCheckpoints.length}` },
					]}
				/>
				<label className="flex min-w-0 flex-1 basis-56 flex-col font-medium tablet:max-w-88">
					<span className="sr-only">Find</span>
					<input
						type="search"
						value={find}
						onChange={(event) => setFind(event.currentTarget.value || null)}
						placeholder="Find: C/3, wall, ground …"
						className="min-h-10 rounded-corner border-[1.5px] border-field bg-sheet px-3 font-normal text-ink placeholder:text-second pointer-coarse:min-h-12"
					/>
				</label>
				{mayName && !isCheckpoints && (
					<NameBar
						siteId={siteId}
						revisionId={revisionId}
						elements={elements}
						typed={typed}
						onBegin={() => setTyped(new Map())}
						onEnd={() => setTyped(null)}
					/>
				)}
				{isPhone && (
					<Segmented
						legend="Show as"
						value={shownOnPhone ?? 'list'}
						onChange={(next) => setView(next === 'list' ? null : next)}
						options={[
							{ value: 'list', label: 'List' },
							{ value: 'plan', label: 'On plan' },
							{ value: 'model', label: 'On model' },
						]}
					/>
				)}
			</div>
			<div className="grid gap-3.5 cabin:grid-cols-[15rem_minmax(0,1fr)] desk:grid-cols-[13rem_minmax(0,1.65fr)_minmax(0,1fr)]">
				{isPhone ? (
					<details>
						<summary className="min-h-12 cursor-pointer py-2.5 font-medium">
							{place.storey === null ? 'By storey and class' : placeToAddress(place)?.replace('/Ifc', ', ')}
						</summary>
						{treeView}
					</details>
				) : (
					<div className="self-start">{treeView}</div>
				)}
				<div className={isPhone && shownOnPhone !== 'list' ? 'hidden' : 'flex min-w-0 flex-col gap-2.5'}>
					{mayChoose && isCheckpoints && <ChooseBar siteId={siteId} revisionId={revisionId} ids={[...ticked]} onDone={untick} />}
					{isCheckpoints ? (
						<CheckpointTable
							elements={shown}
							ofElement={ofElement}
							chosenId={chosen?.id ?? null}
							onChoose={chooseCheckpoint}
							ticked={ticked}
							onTick={tick}
							mayTick={mayChoose}
						/>
					) : (
						<ElementTable
							elements={shown}
							chosenId={chosenElement?.elementId ?? null}
							onChoose={chooseOnlyElement}
							typed={mayName ? typed : null}
							onType={type}
						/>
					)}
				</div>
				<div className="flex min-w-0 flex-col gap-3.5 cabin:col-start-2 desk:col-start-3">
					{(!isPhone || shownOnPhone !== 'list') && (
						<div className="h-[min(26rem,60dvh)]">
							<RevisionViewer
								siteId={siteId}
								revision={revision}
								elements={elements}
								shown={shown}
								checkpoints={shownCheckpoints}
								chosen={chosen}
								chosenElement={chosenElement}
								mode={view === 'model' ? 'model' : 'plan'}
								onMode={(next) => setView(next === 'model' || isPhone ? next : null)}
								isPlacing={pickFor !== null}
								commands={commands}
								onChoose={chooseCheckpoint}
								onElement={onEntity}
								onPlace={onPicked}
							/>
						</div>
					)}
					{(mayChoose || mayNameAxes) && isNewest && (!isPhone || shownOnPhone !== 'list') && (
						<div className="flex flex-wrap items-center gap-2">
							{mayChoose && (
								<PressChip onPress={() => pickingFor('checkpoint')} title="Press a face of the model: a checkpoint of your own">
									{pickFor === 'checkpoint' ? 'Stop placing' : 'Place a checkpoint'}
								</PressChip>
							)}
							{mayNameAxes && (
								<PressChip onPress={() => pickingFor('axis')} title="Press two points of the model: an axis through both">
									{pickFor === 'axis' ? 'Stop picking' : 'Name an axis'}
								</PressChip>
							)}
							{pickFor === 'axis' && <span role="status">{axisFrom === null ? 'The first point' : 'The second point'}</span>}
						</div>
					)}
					{chosenElement ? (
						<ElementProperties
							element={chosenElement}
							checkpoint={chosen}
							whyNone={
								chosenElement.checkpointCount === 0 ? (whyNone.get(chosenElement.entityNumber) ?? 'its class is not checked') : undefined
							}
							timeZone={site.timeZone}
							acts={
								<span className="flex gap-1.5">
									{(!isPhone || shownOnPhone !== 'list') && <PressChip onPress={frame}>Frame</PressChip>}
									<PressChip onPress={() => setWhere(placeToAddress({ storey: storeyOf(chosenElement), class: chosenElement.class }))}>
										Only its kind
									</PressChip>
								</span>
							}
						/>
					) : (
						!isPhone && <p className="m-0 px-1 text-second">Choose a row or a place: here stands what is known of it.</p>
					)}
				</div>
			</div>
			<div className="mt-6">
				<WithoutCheckpoints reasons={reasons} onElement={chooseOnlyElement} />
			</div>
			{picked && pickFor === 'axis' && axisFrom && (
				<NameAxisForm
					siteId={siteId}
					modelId={revision.modelId}
					from={[axisFrom.place[0], axisFrom.place[1]]}
					to={[picked.place[0], picked.place[1]]}
					onNamed={() => {
						setPicked(null);
						setAxisFrom(null);
					}}
					onClose={() => {
						setPicked(null);
						setAxisFrom(null);
					}}
				/>
			)}
			{picked && pickedElement && pickFor !== 'axis' && (
				<AddCheckpointForm
					siteId={siteId}
					revisionId={revisionId}
					element={pickedElement}
					place={picked.place}
					normal={picked.normal}
					onAdded={(id) => {
						setPicked(null);
						setPickFor(null);
						setShow('checkpoints');
						chooseCheckpoint(id);
					}}
					onClose={() => setPicked(null)}
				/>
			)}
		</>
	);
}

/** What may be chosen where a finding holds two readings against each other. */
function readingActs(
	siteId: string,
	{ modelId }: RevisionDetail,
	{ code, evidence }: RevisionDetail['reading']['findings'][number],
): ReactNode {
	if (code === 'map-scale') return <ChooseReading siteId={siteId} modelId={modelId} options={scaleOptions} />;
	if (code !== 'unit-contradiction') return null;
	const readings = z.array(z.object({ metresPerUnit: z.number() })).safeParse(evidence.readings);
	const units = [...new Set(readings.data?.map(({ metresPerUnit }) => metresPerUnit) ?? [])];
	return <ChooseReading siteId={siteId} modelId={modelId} options={units.map(unitOption)} />;
}

function headlineOf(elementCount: number, without: number, checkpointCount: number, leftOut: number): string {
	const asked = leftOut === 0 ? '' : `, ${leftOut} of them left out`;
	return without === 0
		? `All ${counted(elementCount, 'element')} have checkpoints: ${counted(checkpointCount, 'place')}${asked}`
		: `${counted(elementCount - without, 'element')} have ${counted(checkpointCount, 'checkpoint')}${asked}; ${without} have none`;
}

function whyNoMap({ mapConversion, metresPerUnit }: RevisionDetail['reading']): string | null {
	if (mapConversion === null) return 'The model does not say where it lies on the map.';
	return mapScaleFinding(mapConversion, metresPerUnit)?.message ?? null;
}
