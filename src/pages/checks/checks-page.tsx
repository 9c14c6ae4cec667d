import { useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { CheckHead } from '#shared/check/contract.ts';
import { CheckList } from '#src/features/check/check-list.tsx';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { useAddressId, useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { RunCheck } from './run-check.tsx';

/** The site's checks, newest first, and making one. */
export default function ChecksPage() {
	const siteId = useAddressId('siteId');
	const site = useSite();
	const queries = useQueryClient();
	const mayCheck = useMay('check.write');
	// A survey in the address asks for a check of it: so other pages lead here.
	const [askedSurvey, askSurvey] = useAddressState('survey');
	const input = { siteId };
	const [{ data: checks }, { data: models }, { data: surveys }, { data: sheets }] = useSuspenseQueries({
		queries: [
			{
				...api.check.list.queryOptions({ input }),
				refetchInterval: ({ state }: { state: { data?: CheckHead[] | undefined } }) =>
					state.data?.some((check) => check.state === 'computing') ? 4000 : (false as const),
			},
			api.model.list.queryOptions({ input }),
			api.survey.list.queryOptions({ input }),
			api.tolerance.list.queryOptions({ input }),
		],
	});
	const isRunning = mayCheck && (askedSurvey !== null || checks.length === 0);
	return (
		<>
			<Strip
				items={[
					counted(checks.length, 'check'),
					checks[0] !== undefined && checks[0].state === 'trial' && 'the newest is a trial',
					<Link key="sheets" to={`/sites/${siteId}/sheets`}>
						tolerance sheets
					</Link>,
				]}
			/>
			<Headline
				title="Checks"
				acts={
					!isRunning && (
						<Button weight="act" whyNot={mayCheck ? null : 'A site engineer makes checks.'} onClick={() => askSurvey('newest')}>
							Check now
						</Button>
					)
				}
			>
				{headlineOf(checks)}
			</Headline>
			<div className="flex flex-col gap-5">
				{isRunning && (
					<RunCheck
						siteId={siteId}
						models={models}
						surveys={surveys}
						sheets={sheets}
						askedSurveyId={askedSurvey}
						{...(checks.length > 0 && { onLeave: () => askSurvey(null) })}
						onRun={() => void queries.invalidateQueries({ queryKey: api.check.key() })}
					/>
				)}
				{checks.length === 0 && !mayCheck && <Notice kind="empty" title="A site engineer checks what was measured against the design" />}
				{checks.length > 0 && <CheckList siteId={siteId} checks={checks} timeZone={site.timeZone} />}
			</div>
		</>
	);
}

/** The newest check's consequence; what came before it is below. */
function headlineOf(checks: readonly CheckHead[]): string {
	const newest = checks[0];
	if (newest === undefined) return 'Nothing has been checked yet';
	if (newest.state === 'computing') return `Check ${newest.number} is being computed`;
	if (newest.state === 'failed') return `Check ${newest.number} has no result`;
	const outside = newest.summary.outside ?? 0;
	const close = newest.summary['too-close-to-call'] ?? 0;
	if (outside === 0 && close === 0) return `Nothing is off in check ${newest.number}`;
	const parts = [
		outside > 0 ? `${counted(outside, 'point')} outside` : null,
		close > 0 ? `${counted(close, 'point')} too close to call` : null,
	];
	return `Check ${newest.number}: ${parts.filter((part) => part !== null).join(', ')}`;
}
