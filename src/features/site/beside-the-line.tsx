import { Link } from 'react-router-dom';
import { useMay } from '#src/lib/session.ts';

/** What belongs to the site and hangs from no place of its line. */
export function BesideTheLine({ siteId }: { siteId: string }) {
	const mayAudit = useMay('audit.see');
	const places = [
		{ path: 'people', word: 'People', what: 'who is on the site, in which role, for which firm' },
		{ path: 'settings', word: 'Site settings', what: 'working days, who agrees to what, checkpoints' },
		...(mayAudit ? [{ path: 'audit', word: 'Record of acts', what: 'who did what, as what, and when' }] : []),
	];
	return (
		<nav aria-labelledby="beside">
			<h2 id="beside" className="m-0 mt-6 mb-2 text-h2 font-strong">
				Beside the line
			</h2>
			<ul className="m-0 list-none border-t border-rule p-0">
				{places.map(({ path, word, what }) => (
					<li key={path} className="border-b border-rule">
						<Link
							to={`/sites/${siteId}/${path}`}
							className="flex min-h-12 flex-wrap items-center gap-x-3 py-2 text-ink no-underline hover:bg-hair"
						>
							<span className="font-medium">{word}</span>
							<span className="text-second">{what}</span>
							<span aria-hidden="true" className="ml-auto pr-1">
								›
							</span>
						</Link>
					</li>
				))}
			</ul>
		</nav>
	);
}
