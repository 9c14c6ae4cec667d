import { useSuspenseQueries, useSuspenseQuery } from '@tanstack/react-query';
import { useId, useMemo } from 'react';
import { Link, useParams } from 'react-router-dom';
import type { ControlPoint } from '#shared/control/contract.ts';
import { type Stage, stages } from '#shared/tolerance/sheet-schema.ts';
import { plannedCheckpoints } from '#src/features/fit/planned-checkpoints.ts';
import type { PlannedMark } from '#src/features/fit/survey-plan.ts';
import { SurveyPlanner } from '#src/features/fit/survey-planner.tsx';
import { planExtentOf } from '#src/features/fit/uncertainty-field.ts';
import { stageWords } from '#src/features/survey/survey-words.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** Before going out: what a survey on this control could tell of this model under this sheet. */
export default function PlanSurveyPage() {
	const { siteId = '' } = useParams();
	const [{ data: controlSets }, { data: models }, { data: sheets }] = useSuspenseQueries({
		queries: [
			api.control.list.queryOptions({ input: { siteId } }),
			api.model.list.queryOptions({ input: { siteId } }),
			api.tolerance.list.queryOptions({ input: { siteId } }),
		],
	});
	const control = controlSets[0];
	const revision = models.flatMap((model) => model.revisions).find((candidate) => candidate.state === 'ready');
	const sheet = sheets.find(({ state }) => state === 'issued');
	if (!control || !revision || !sheet)
		return (
			<>
				<Headline>What a survey could tell cannot be worked out yet</Headline>
				<Notice
					kind="empty"
					title={control ? (revision ? 'No tolerance sheet is issued' : 'There is no model yet') : 'There is no control yet'}
					act={
						control ? undefined : (
							<ButtonLink to={`/sites/${siteId}/control`} weight="act">
								Bring the control
							</ButtonLink>
						)
					}
				>
					It takes marks to tie to, checkpoints to look at, and limits to hold them against.
				</Notice>
			</>
		);
	return (
		<Planned
			siteId={siteId}
			controlSetId={control.controlSetId}
			controlWords={`control ${control.number}, newest`}
			revisionId={revision.revisionId}
			revisionWords={`rev ${revision.number}`}
			sheetId={sheet.sheetId}
		/>
	);
}

interface PlannedProps {
	siteId: string;
	controlSetId: string;
	controlWords: string;
	revisionId: string;
	revisionWords: string;
	sheetId: string;
}

function Planned({ siteId, controlSetId, controlWords, revisionId, revisionWords, sheetId }: PlannedProps) {
	const stageId = useId();
	const [asked, setStage] = useAddressState('stage');
	const stage: Stage = stages.find((one) => one === asked) ?? 'as-cast';
	const [{ data: control }, { data: revision }, { data: elements }, { data: checkpoints }] = useSuspenseQueries({
		queries: [
			api.control.get.queryOptions({ input: { siteId, controlSetId } }),
			api.model.revision.queryOptions({ input: { siteId, revisionId } }),
			api.model.elements.queryOptions({ input: { siteId, revisionId } }),
			api.model.checkpoints.queryOptions({ input: { siteId, revisionId } }),
		],
	});
	const { data: sheet } = useSuspenseQuery(api.tolerance.get.queryOptions({ input: { siteId, sheetId } }));
	const marks = useMemo(() => control.points.flatMap(markOf), [control]);
	const withoutSigma = useMemo(() => control.points.filter((point) => markOf(point).length === 0).map(({ name }) => name), [control]);
	const planned = useMemo(() => plannedCheckpoints(elements, checkpoints, sheet.sheet, stage), [elements, checkpoints, sheet, stage]);
	const outline = useMemo(() => planExtentOf(elements), [elements]);
	return (
		<>
			<Strip
				items={[
					<Link key="surveys" to={`/sites/${siteId}/surveys`} className="underline underline-offset-3">
						surveys
					</Link>,
					controlWords,
					revisionWords,
					`${sheet.name}, issued`,
					<label key="stage" htmlFor={stageId} className="inline-flex items-center gap-1.5">
						stage
						<select
							id={stageId}
							value={stage}
							onChange={(event) => setStage(event.currentTarget.value)}
							className="rounded-corner border border-field bg-sheet px-1 text-ink pointer-coarse:min-h-12"
						>
							{stages.map((option) => (
								<option key={option} value={option}>
									{stageWords[option]}
								</option>
							))}
						</select>
					</label>,
				]}
			/>
			<SurveyPlanner marks={marks} withoutSigma={withoutSigma} checkpoints={planned} grid={revision.reading.grid} outline={outline} />
		</>
	);
}

/** A mark that is known whole and how well; none where it is not. */
function markOf({ name, designM: [east, north, height], sigmaPlanM, sigmaHeightM }: ControlPoint): PlannedMark[] {
	if (east === null || north === null || height === null || sigmaPlanM === null || sigmaHeightM === null) return [];
	return [{ name, place: [east, north, height], sigmaPlanM, sigmaHeightM }];
}
