import { Link } from 'react-router-dom';
import type { SurveySummary } from '#shared/survey/contract.ts';
import { count, counted } from '#src/lib/format.ts';
import { stageWords } from './survey-words.ts';

/** Surveys, newest first, each with its set-ups and whether they are tied to the design. */
export function SurveyList({ siteId, surveys }: { siteId: string; surveys: readonly SurveySummary[] }) {
	return (
		<ul className="m-0 flex list-none flex-col gap-3 p-0">
			{surveys.map((survey) => (
				<li key={survey.surveyId} className="sheet px-4.5 py-3.5">
					<div className="flex flex-wrap items-center gap-x-6">
						<Link
							to={`/sites/${siteId}/surveys/${survey.surveyId}`}
							className="inline-flex min-h-11 items-center text-lead font-strong text-action underline underline-offset-3"
						>
							Survey {survey.number}, {survey.name}
						</Link>
						<span className="text-second">
							{survey.surveyedOn}, {stageWords[survey.stage]}, {count(survey.pointCount)} points, {survey.observer}
						</span>
					</div>
					{survey.state === 'failed' && <p className="m-0">{survey.reason}</p>}
					<ul className="m-0 mt-1 flex list-none flex-col p-0">
						{survey.setups.map((setup) => (
							<li key={setup.setupId} className="flex flex-wrap items-center gap-x-3">
								<Link
									to={`/sites/${siteId}/surveys/${survey.surveyId}/setups/${setup.setupId}`}
									className="inline-flex min-h-9 items-center text-action underline underline-offset-3 pointer-coarse:min-h-12"
								>
									Set-up {setup.name}
								</Link>
								<span>
									{counted(setup.targetCount, 'target')}, {count(setup.pointCount)} points,{' '}
									{setup.adoptedFitId ? 'fit adopted' : <b>no adopted fit</b>}
								</span>
							</li>
						))}
					</ul>
				</li>
			))}
		</ul>
	);
}
