import { useQuery, useSuspenseQueries } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { CheckDetail } from '#shared/check/contract.ts';
import { BesideTheLine } from '#src/features/site/beside-the-line.tsx';
import { NextForYou } from '#src/features/site/next-for-you.tsx';
import { PlacesList } from '#src/features/site/places-list.tsx';
import { WaitingOnOthers } from '#src/features/site/waiting-on-others.tsx';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { useNow } from '#src/lib/now.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';
import { useIsBelow } from '#src/ui/screen-width.ts';
import { Strip } from '#src/ui/strip.tsx';
import { homeless } from './homeless.ts';
import { MayWePour } from './may-we-pour.tsx';
import { PourRows } from './pour-rows.tsx';

/** The site's first page: what waits for one, then the pours by the hour of their concrete. */
export default function BoardPage() {
	const site = useSite();
	const now = useNow();
	const { siteId, timeZone, line } = site;
	const input = { siteId };
	const [{ data: board }, { data: checks }, { data: pours }] = useSuspenseQueries({
		queries: [api.site.board.queryOptions({ input }), api.check.list.queryOptions({ input }), api.pour.list.queryOptions({ input })],
	});
	// The check's figures are many: the page stands before they come.
	const judged = checks.find((check) => check.state === 'trial' || check.state === 'published');
	const detail = useQuery(api.check.get.queryOptions({ input: { siteId, checkId: judged?.checkId ?? '' }, enabled: judged !== undefined }));
	const check = judged === undefined || detail.isError ? null : detail.data;

	// Where each pour stands takes all its figures: their heads stand before.
	const standing = useQuery(api.pour.board.queryOptions({ input }));
	const isPhone = useIsBelow('tablet');
	const isContractor = site.roles.every((role) => role === 'contractor');

	const rows = standing.isPending ? (
		<LoadingLines what="The pours" />
	) : standing.isError ? (
		<Notice kind="wrong" title={refusalOf(standing.error).message} act={<Button onClick={() => standing.refetch()}>Try again</Button>}>
			Where the pours stand could not be read. Nothing was changed.
		</Notice>
	) : null;
	if (isPhone && isContractor)
		return (
			<div className="pt-2">
				{rows ?? <MayWePour siteId={siteId} rows={standing.data ?? []} now={now} />}
				<PlacesList siteId={siteId} line={line} />
				<BesideTheLine siteId={siteId} />
			</div>
		);
	return (
		<div className="pt-2">
			{site.isInvented && (
				<Strip items={[<b key="invented">This site is invented</b>, 'its names and figures are nobody’s; try anything']} />
			)}
			<div className="mb-6.5 grid gap-x-7 gap-y-4 desk:grid-cols-[minmax(0,62rem)_minmax(18rem,1fr)]">
				<section>
					<Headline title={site.name}>Next for you</Headline>
					<NextForYou siteId={siteId} acts={board.next} timeZone={timeZone} now={now} />
				</section>
				<WaitingOnOthers waiting={board.waiting} timeZone={timeZone} now={now} />
			</div>
			<section aria-labelledby="pours">
				<h2 id="pours" className="m-0 mb-1 text-h1-phone font-strong tracking-[-0.015em] tablet:text-h1">
					Pours, by their concrete
				</h2>
				{pours.length === 0 ? (
					<NoPours siteId={siteId} />
				) : (
					(rows ?? <PourRows siteId={siteId} rows={standing.data ?? []} timeZone={timeZone} now={now} />)
				)}
				{check && <Homeless siteId={siteId} check={check} />}
			</section>
			<PlacesList siteId={siteId} line={line} />
			<BesideTheLine siteId={siteId} />
		</div>
	);
}

function NoPours({ siteId }: { siteId: string }) {
	const mayPlan = useMay('pour.write');
	return (
		<Notice
			kind="empty"
			title="No pour is planned yet."
			act={
				mayPlan && (
					<ButtonLink to={`/sites/${siteId}/pours`} weight="quiet">
						Plan a pour
					</ButtonLink>
				)
			}
		>
			{mayPlan
				? 'Say what is concreted together, by whom and when.'
				: 'The project engineer plans them; each then stands here on its own string.'}
		</Notice>
	);
}

/** Rows without a home, last. */
function Homeless({ siteId, check }: { siteId: string; check: CheckDetail }) {
	const rows = homeless(check);
	if (rows.length === 0) return null;
	return (
		<ul className="m-0 list-none p-0">
			{rows.map((row) => (
				<li key={row.words} className="border-b border-hair">
					<Link
						to={`/sites/${siteId}/checks/${check.checkId}`}
						className="flex min-h-12 items-center gap-4 text-ink no-underline hover:bg-hair"
					>
						<span className="w-28 shrink-0 text-second tablet:w-37">{row.words}</span>
						<span>
							{row.why} of check {check.number}
						</span>
					</Link>
				</li>
			))}
		</ul>
	);
}
