import { useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { mayWith } from '#shared/permissions.ts';
import type { SetupSummary, SurveySummary } from '#shared/survey/contract.ts';
import { SetupsTogether } from '#src/features/fit/setups-together.tsx';
import { observationWords } from '#src/features/survey/observation-words.ts';
import { SurveyPointTable } from '#src/features/survey/survey-point-table.tsx';
import { levelWords, setupWords, stageWords, surveyHeadline } from '#src/features/survey/survey-words.ts';
import { UnvoidDialog } from '#src/features/survey/unvoid-dialog.tsx';
import { api } from '#src/lib/api.ts';
import { count, counted } from '#src/lib/format.ts';
import { useJob } from '#src/lib/job-progress.ts';
import { ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';
import { Strip } from '#src/ui/strip.tsx';

const shownPoints = 20_000;

/** One survey: how it was made, its set-ups and their fits, its points. */
export default function SurveyPage() {
	const { siteId = '', surveyId = '' } = useParams();
	const [{ data: site }, { data: survey }, { data: measured }, { data: controlSets }] = useSuspenseQueries({
		queries: [
			api.site.get.queryOptions({ input: { siteId } }),
			api.survey.get.queryOptions({ input: { siteId, surveyId } }),
			api.survey.points.queryOptions({ input: { siteId, surveyId, offset: 0, limit: shownPoints } }),
			api.control.list.queryOptions({ input: { siteId } }),
		],
	});
	const mayCheck = mayWith(site.roles, 'check.write');
	const [restored, setRestored] = useState<SetupSummary | null>(null);
	const isTied = survey.setups.some((setup) => setup.adoptedFitId !== null);
	return (
		<>
			<Strip
				items={[
					<Link key="all" to={`/sites/${siteId}/surveys`} className="underline underline-offset-3">
						all surveys
					</Link>,
					survey.name,
					`${survey.surveyedOn}, ${stageWords[survey.stage]}`,
					survey.observer,
					`${survey.instrument}, serial ${survey.serial}`,
					survey.fileName,
				]}
			/>
			<Headline
				title={`Survey ${survey.number}`}
				acts={
					mayCheck &&
					isTied && (
						<ButtonLink weight="act" to={`/sites/${siteId}/check?survey=${surveyId}`}>
							Check this survey
						</ButtonLink>
					)
				}
			>
				{surveyHeadline(survey)}
			</Headline>
			<div className="flex flex-col gap-6">
				{survey.state === 'storing' && survey.jobId && mayWith(site.roles, 'job.see') && <Storing siteId={siteId} jobId={survey.jobId} />}
				{survey.state === 'failed' && (
					<Notice kind="wrong" title="Nothing of it was stored">
						{survey.reason}
					</Notice>
				)}
				<ul className="m-0 flex list-none flex-col gap-3 p-0">
					{survey.setups.map((setup) => (
						<li key={setup.setupId} className="sheet flex flex-wrap items-center gap-x-6 gap-y-2 px-4.5 py-3.5">
							<span className="min-w-0 flex-1 basis-72">
								<b className="text-lead">Set-up {setup.name}</b>
								<span className="block">
									{counted(setup.targetCount, 'target')} in the newest control, {count(setup.pointCount)} points
								</span>
								<span className="block text-second">{setupWords(setup)}</span>
								<LevelRunLine setup={setup} />
							</span>
							<ButtonLink weight={setup.adoptedFitId ? 'quiet' : 'act'} to={`/sites/${siteId}/surveys/${surveyId}/setups/${setup.setupId}`}>
								{setup.adoptedFitId ? 'See its fit' : 'Fit it'}
							</ButtonLink>
						</li>
					))}
				</ul>
				{survey.state === 'ready' && survey.setups.length > 1 && controlSets[0] && (
					<SetupsTogether
						siteId={siteId}
						surveyId={surveyId}
						controlSetId={controlSets[0].controlSetId}
						mayFit={mayWith(site.roles, 'fit.write')}
						addressOf={(setupId, fitId) => `/sites/${siteId}/surveys/${surveyId}/setups/${setupId}?fit=${fitId}`}
					/>
				)}
				<HowMeasured survey={survey} />
				<section aria-label="Points" className="flex flex-col gap-3">
					<h2 className="m-0 text-h2 font-strong">
						{measured.total > shownPoints
							? `The first ${count(shownPoints)} of ${count(measured.total)} points`
							: `${count(measured.total)} points`}
					</h2>
					<SurveyPointTable
						points={measured.points}
						setups={survey.setups}
						onTakeBack={mayWith(site.roles, 'survey.write') ? setRestored : null}
					/>
					{restored && <UnvoidDialog siteId={siteId} setup={restored} onClose={() => setRestored(null)} />}
				</section>
			</div>
		</>
	);
}

function LevelRunLine({ setup }: { setup: SetupSummary }) {
	const run = levelWords(setup);
	return run && <span className={`block ${run.isOver ? 'font-strong' : 'text-second'}`}>{run.words}.</span>;
}

/** The observation record, folded; what was left blank is said. */
function HowMeasured({ survey }: { survey: SurveySummary }) {
	const { said, notSaid } = observationWords(survey);
	return (
		<details className="sheet px-4.5 py-2">
			<summary className="min-h-11 content-center pointer-coarse:min-h-12">
				<b className="font-strong">How it was measured</b>{' '}
				<span className="text-second">{said.length === 0 ? 'nothing was stated' : `${said.length} stated, ${notSaid.length} not`}</span>
			</summary>
			{said.length > 0 && <p className="mt-1 mb-1">{said.join(' · ')}</p>}
			{notSaid.length > 0 && <p className="mt-0 mb-2 text-second">Not stated: {notSaid.join(', ')}.</p>}
		</details>
	);
}

function Storing({ siteId, jobId }: { siteId: string; jobId: string }) {
	const queries = useQueryClient();
	const { job, cancel, isCancelling } = useJob(siteId, jobId, () => {
		for (const queryKey of [api.survey.key(), api.site.key()]) queries.invalidateQueries({ queryKey });
	});
	return (
		<Progress
			doing={job?.doing ?? 'Waiting its turn'}
			done={job?.done ?? 0}
			of={job?.of ?? 0}
			onCancel={cancel}
			isCancelling={isCancelling}
			note="You can leave this page; it goes on."
		/>
	);
}
