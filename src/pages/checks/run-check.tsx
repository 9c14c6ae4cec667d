import { useMutation } from '@tanstack/react-query';
import { type ReactNode, useId, useState } from 'react';
import { useNavigate } from 'react-router-dom';
import type { z } from 'zod';
import type { modelSummary } from '#shared/model/contract.ts';
import type { SurveySummary } from '#shared/survey/contract.ts';
import type { SheetSummary } from '#shared/tolerance/contract.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { calendarDay, counted } from '#src/lib/format.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { FieldFrame } from '#src/ui/field.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { checkableRevisions, type Missing, missingForCheck } from './missing-for-check.ts';

interface RunCheckProps {
	siteId: string;
	models: readonly z.infer<typeof modelSummary>[];
	surveys: readonly SurveySummary[];
	sheets: readonly SheetSummary[];
	/** From the address; another word means the newest. */
	askedSurveyId: string | null;
	onLeave?: () => void;
	onRun: () => void;
}

/** Which design, which survey, which sheet: the newest of each unless another is chosen. What is missing is said, with the page that helps. */
export function RunCheck({ siteId, models, surveys, sheets, askedSurveyId, onLeave, onRun }: RunCheckProps) {
	const navigate = useNavigate();
	const revisions = checkableRevisions(models);
	const stored = surveys.filter((survey) => survey.state === 'ready');
	const issued = sheets.filter((sheet) => sheet.state === 'issued');
	const asked = stored.find((survey) => survey.surveyId === askedSurveyId);
	const [revisionId, setRevisionId] = useState<string | null>(null);
	const [surveyId, setSurveyId] = useState<string | null>(asked?.surveyId ?? null);
	const [sheetId, setSheetId] = useState<string | null>(null);
	const revision = revisions.find((each) => each.revisionId === revisionId) ?? revisions[0] ?? null;
	const survey = stored.find((each) => each.surveyId === surveyId) ?? asked ?? stored[0] ?? null;
	const sheet = issued.find((each) => each.sheetId === sheetId) ?? issued[0] ?? null;
	const missing = missingForCheck({ revisions, surveys, sheets, survey });
	const bar = missing.find((each) => each.isBar);
	const run = useMutation(
		api.check.run.mutationOptions({
			onSuccess: ({ checkId }) => {
				onRun();
				navigate(`/sites/${siteId}/checks/${checkId}`);
			},
		}),
	);
	return (
		<section className="sheet px-4.5 py-4" aria-label="Check now">
			<div className="grid gap-4 cabin:grid-cols-3">
				<Chosen
					label="Against which design"
					value={revision?.revisionId ?? ''}
					onChange={setRevisionId}
					options={revisions.map((each) => ({
						value: each.revisionId,
						label: `${each.modelName} rev ${each.number}${each.isNewest ? ', newest' : ''}, ${counted(each.checkpointCount, 'checkpoint')}`,
					}))}
					empty="No revision is read"
				/>
				<Chosen
					label="Which survey"
					value={survey?.surveyId ?? ''}
					onChange={setSurveyId}
					options={stored.map((each) => ({
						value: each.surveyId,
						label: `${each.number}, ${each.name}, ${calendarDay(each.surveyedOn, each.storedAt)}, ${counted(each.pointCount, 'point')}`,
					}))}
					empty="No survey is stored"
				/>
				<Chosen
					label="By which tolerance sheet"
					value={sheet?.sheetId ?? ''}
					onChange={setSheetId}
					options={issued.map((each) => ({ value: each.sheetId, label: `${each.name} rev ${each.revision}, ${each.decision}` }))}
					empty="No sheet is issued"
				/>
			</div>
			<MissingList siteId={siteId} missing={missing} />
			{run.error && (
				<div className="mt-4">
					<Notice kind="wrong" title="The check was not started.">
						{refusalOf(run.error).message} Nothing was changed.
					</Notice>
				</div>
			)}
			<div className="mt-4 flex flex-wrap items-center gap-2.5">
				<Button
					weight="act"
					isBusy={run.isPending}
					whyNot={bar?.sentence ?? null}
					onClick={() => {
						if (revision === null || survey === null || sheet === null) return;
						run.mutate({ siteId, revisionId: revision.revisionId, surveyId: survey.surveyId, sheetId: sheet.sheetId });
					}}
				>
					Check now
				</Button>
				{onLeave && (
					<Button weight="plain" onClick={onLeave}>
						Not now
					</Button>
				)}
				<span className="text-small text-second">It begins as a trial: nobody is told, nothing is flagged.</span>
			</div>
		</section>
	);
}

interface ChosenProps {
	label: string;
	value: string;
	onChange: (value: string) => void;
	options: readonly { value: string; label: string }[];
	/** Stands in the field where there is nothing to choose. */
	empty: string;
}

function Chosen({ label, value, onChange, options, empty }: ChosenProps): ReactNode {
	const id = useId();
	return (
		<FieldFrame id={id} label={label}>
			<select
				id={id}
				value={value}
				onChange={(event) => onChange(event.target.value)}
				className="block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 py-1.5 text-body text-ink pointer-coarse:min-h-12"
			>
				{options.length === 0 && <option value="">{empty}</option>}
				{options.map((option) => (
					<option key={option.value} value={option.value}>
						{option.label}
					</option>
				))}
			</select>
		</FieldFrame>
	);
}

function MissingList({ siteId, missing }: { siteId: string; missing: readonly Missing[] }) {
	if (missing.length === 0) return null;
	return (
		<ul className="m-0 mt-4 list-none border-t border-t-hair p-0">
			{missing.map((each) => (
				<li key={each.sentence} className="flex flex-wrap items-center gap-x-4 gap-y-1 border-b border-b-hair py-2">
					<span className="min-w-0 flex-1 basis-72">{each.sentence}</span>
					<ButtonLink to={`/sites/${siteId}${each.path === '' ? '' : `/${each.path}`}`}>{each.word}</ButtonLink>
				</li>
			))}
		</ul>
	);
}
