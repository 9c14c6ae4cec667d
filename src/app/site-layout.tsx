import { generatePath, Link, useParams } from 'react-router-dom';
import { WaitingStrip } from '#src/features/flag/waiting-strip.tsx';
import { roleWords } from '#src/features/site/role-words.ts';
import { SiteLine } from '#src/features/site/site-line.tsx';
import { useSite } from '#src/lib/session.ts';
import { Head } from './head.tsx';
import { PageFrame } from './page-frame.tsx';
import { usePageHandle } from './page-handle.ts';

/** Round a site's pages: the head with the site and the role, and the line. Asks for the site itself, so that a page without it is never drawn. */
export function SiteLayout() {
	const { siteId = '' } = useParams();
	// Another site begins anew: nothing of the last one stays on the screen.
	return <SiteFrame key={siteId} />;
}

function SiteFrame() {
	const site = useSite();
	const parts = useParams();
	const { place, back } = usePageHandle();
	const home = `/sites/${site.siteId}`;
	return (
		<PageFrame
			head={
				<>
					<Head
						memberRole={roleWords(site.roles)}
						back={
							back
								? { to: back.path === '' ? home : `${home}/${generatePath(back.path, parts)}`, word: back.word }
								: place === null
									? null
									: { to: home, word: site.name }
						}
					>
						<Link to={home} className="text-second no-underline hover:underline hover:underline-offset-4">
							{site.name}
						</Link>
					</Head>
					<SiteLine siteId={site.siteId} line={site.line} place={place} />
					<WaitingStrip />
				</>
			}
		/>
	);
}
