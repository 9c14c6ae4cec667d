import { useSuspenseQueries } from '@tanstack/react-query';
import { useState } from 'react';
import { useNavigate, useParams } from 'react-router-dom';
import { mayWith } from '#shared/permissions.ts';
import { PointFile } from '#src/features/survey/point-file.tsx';
import { useSendFile } from '#src/features/survey/send-file.ts';
import { SurveyFormFields } from '#src/features/survey/survey-form.tsx';
import { SurveyList } from '#src/features/survey/survey-list.tsx';
import { api } from '#src/lib/api.ts';
import { bytes, counted, isoMoment } from '#src/lib/format.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** What was measured, and bringing more. */
export default function SurveysPage() {
	const { siteId = '' } = useParams();
	const [isBringing, setIsBringing] = useState(false);
	const [{ data: site }, { data: surveys }, { data: me }] = useSuspenseQueries({
		queries: [
			api.site.get.queryOptions({ input: { siteId } }),
			api.survey.list.queryOptions({ input: { siteId } }),
			api.account.me.queryOptions(),
		],
	});
	const mayWrite = mayWith(site.roles, 'survey.write');
	return (
		<>
			<Strip items={[counted(surveys.length, 'survey')]} />
			<Headline
				title="Surveys"
				acts={
					<>
						<ButtonLink to={`/sites/${siteId}/plan-survey`}>Before going out</ButtonLink>
						{!isBringing && surveys.length > 0 && (
							<Button weight="act" whyNot={mayWrite ? null : 'A site engineer brings surveys.'} onClick={() => setIsBringing(true)}>
								Bring a survey
							</Button>
						)}
					</>
				}
			>
				{headlineOf(surveys)}
			</Headline>
			<div className="flex flex-col gap-6">
				{surveys.length === 0 && !mayWrite && <Notice kind="empty" title="A site engineer brings what was measured" />}
				{(isBringing || surveys.length === 0) && mayWrite && me && (
					<BringSurvey siteId={siteId} userId={me.userId} columnOrder={site.columnOrder} timeZone={site.timeZone}>
						{surveys.length > 0 && (
							<div>
								<Button weight="plain" onClick={() => setIsBringing(false)}>
									Bring none now
								</Button>
							</div>
						)}
					</BringSurvey>
				)}
				<SurveyList siteId={siteId} surveys={surveys} />
			</div>
		</>
	);
}

function headlineOf(surveys: readonly { number: number; setups: readonly { adoptedFitId: string | null }[] }[]): string {
	if (surveys.length === 0) return 'Nothing has been surveyed yet';
	const open = surveys.filter((survey) => survey.setups.some((setup) => setup.adoptedFitId === null));
	if (open.length === 0) return `${counted(surveys.length, 'survey')}, ${surveys.length === 1 ? '' : 'all '}tied to the design`;
	return `${counted(open.length, 'survey')} ${open.length === 1 ? 'waits' : 'wait'} for a fit`;
}

interface BringSurveyProps {
	siteId: string;
	userId: string;
	columnOrder: 'PENZD' | 'PNEZD' | null;
	timeZone: string;
	children: React.ReactNode;
}

function BringSurvey({ siteId, userId, columnOrder, timeZone, children }: BringSurveyProps) {
	const navigate = useNavigate();
	const { sent, send } = useSendFile(siteId, userId, 'survey');
	return (
		<section aria-label="Bring a survey" className="flex max-w-[60rem] flex-col gap-4">
			<PointFile
				label="The points, a CSV file"
				hint="Name, x, y, z in the instrument’s frame; σ, set-up, offset where there are"
				mayLackCoordinates={false}
				columnOrder={columnOrder}
			>
				{(read) => (
					<>
						{sent && <Progress doing={`Sending ${read.file.name}`} done={sent.done} of={sent.of} amount={bytes} />}
						<SurveyFormFields
							siteId={siteId}
							read={read}
							today={isoMoment(new Date(), timeZone).slice(0, 10)}
							send={() => send(read.file)}
							onStored={(surveyId) => navigate(`/sites/${siteId}/surveys/${surveyId}`)}
						/>
					</>
				)}
			</PointFile>
			{children}
		</section>
	);
}
