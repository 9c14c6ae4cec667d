import { useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import type { CheckDetail } from '#shared/check/contract.ts';
import { api } from '#src/lib/api.ts';
import { useJob } from '#src/lib/job-progress.ts';
import { useAddressId, useMay } from '#src/lib/session.ts';
import { ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';
import { CheckStrip } from './check-strip.tsx';
import { CheckedPage } from './checked-page.tsx';

/** One check: what it rests on, its headline, every deviation in table and picture. While it is computed, how far that is. */
export default function CheckPage() {
	const siteId = useAddressId('siteId');
	const checkId = useAddressId('checkId');
	const { data: check } = useSuspenseQuery({
		...api.check.get.queryOptions({ input: { siteId, checkId } }),
		// Who may not follow jobs still sees it end.
		refetchInterval: ({ state }) => (state.data?.state === 'computing' ? 4000 : false),
	});
	if (check.state === 'computing') return <ComputingCheck check={check} siteId={siteId} />;
	if (check.state === 'failed') return <FailedCheck check={check} siteId={siteId} />;
	return <CheckedPage key={checkId} check={check} siteId={siteId} />;
}

interface StateProps {
	check: CheckDetail;
	siteId: string;
}

function ComputingCheck({ check, siteId }: StateProps) {
	const queries = useQueryClient();
	const mayFollow = useMay('job.see');
	const mayCancel = useMay('job.cancel');
	const { job, cancel, isCancelling } = useJob(siteId, mayFollow ? check.jobId : null, () => {
		void queries.invalidateQueries({ queryKey: api.check.key() });
		void queries.invalidateQueries({ queryKey: api.site.key() });
	});
	return (
		<>
			<CheckStrip check={check} />
			<Headline>{`Check ${check.number} is being computed`}</Headline>
			<Progress
				doing={job?.doing || 'Waiting for its turn'}
				done={job?.done ?? 0}
				of={job?.of ?? 0}
				{...(mayCancel && { onCancel: cancel })}
				isCancelling={isCancelling}
				note="You can leave this page; it goes on. Nothing is shown before every deviation stands."
			/>
			<div className="sheet mt-4 overflow-hidden">
				<div className="flex h-10 items-center gap-6 border-b border-b-ink px-2 text-small font-medium text-second">
					<span className="flex-1">Where</span>
					<span className="max-tablet:hidden">Against its limits</span>
					<span>mm</span>
					<span>±</span>
					<span className="w-36">Verdict</span>
				</div>
				<LoadingLines what="The deviations" rows={8} />
			</div>
		</>
	);
}

function FailedCheck({ check, siteId }: StateProps) {
	const mayCheck = useMay('check.write');
	return (
		<>
			<CheckStrip check={check} />
			<Headline>{`Check ${check.number} has no result`}</Headline>
			<Notice
				kind="wrong"
				title={check.reason ?? 'It ended without a reason.'}
				act={
					mayCheck && (
						<ButtonLink weight="act" to={`/sites/${siteId}/check?survey=${check.survey.surveyId}`}>
							Check again
						</ButtonLink>
					)
				}
			>
				Model, survey and fits are kept as they were, and so are all other checks. Put right what is named here, then check again.
			</Notice>
		</>
	);
}
