import { useSuspenseQuery } from '@tanstack/react-query';
import { Link, useNavigate } from 'react-router-dom';
import { FoundSiteForm } from '#src/features/site/found-site-form.tsx';
import { roleWords } from '#src/features/site/role-words.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';

/** The sites one is on, and a way to begin one. */
export default function SitesPage() {
	const { data: sites } = useSuspenseQuery(api.site.list.queryOptions());
	const [act, setAct] = useAddressState('act', 'push');
	const navigate = useNavigate();
	const isFounding = act === 'found';
	const found = (
		<Button weight={sites.length === 0 ? 'act' : 'quiet'} onClick={() => setAct('found')}>
			Found a site
		</Button>
	);
	return (
		<div className="pt-4">
			<Headline title="Sites" acts={sites.length > 0 && !isFounding ? found : undefined}>
				{sites.length === 0 ? 'You are on no site yet' : `You are on ${counted(sites.length, 'site')}`}
			</Headline>
			{isFounding && (
				<section aria-label="A new site" className="sheet mb-6 px-4.5 py-4">
					<FoundSiteForm onFounded={(siteId) => navigate(`/sites/${siteId}`)} onLeave={() => setAct(null)} />
				</section>
			)}
			{sites.length === 0 && !isFounding && (
				<Notice kind="empty" title="Wait to be invited, or begin a site of your own." act={found}>
					Who leads a site invites its people by their e-mail address. A site of your own is ready at once.
				</Notice>
			)}
			{sites.length > 0 && (
				<ul className="m-0 list-none border-t border-rule p-0">
					{sites.map((site) => (
						<li key={site.siteId} className="border-b border-rule">
							<Link
								to={`/sites/${site.siteId}`}
								className="flex min-h-14 flex-wrap items-center gap-x-4 py-2 text-ink no-underline hover:bg-hair"
							>
								<span className="font-strong">{site.name}</span>
								<span className="text-second">{roleWords(site.roles)}</span>
								{site.isInvented && <span className="text-second">invented, to try things on</span>}
								<span aria-hidden="true" className="ml-auto pr-2">
									›
								</span>
							</Link>
						</li>
					))}
				</ul>
			)}
		</div>
	);
}
