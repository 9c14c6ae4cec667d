import { Link } from 'react-router-dom';
import type { Line as SiteLineState } from '#shared/site/contract.ts';
import { Knot } from '#src/ui/line.tsx';
import { knotsOf } from './site-line.tsx';

/** The line's places one below the other, for a phone, where the line has no words. */
export function PlacesList({ siteId, line }: { siteId: string; line: SiteLineState }) {
	return (
		<nav aria-labelledby="places" className="tablet:hidden">
			<h2 id="places" className="m-0 mt-6 mb-2 text-h2 font-strong">
				All places
			</h2>
			<ul className="m-0 list-none border-t border-rule p-0">
				{knotsOf(siteId, line).map((knot) => {
					const inside = (
						<>
							<svg width="18" height="18" viewBox="-9 -9 18 18" aria-hidden="true" className="shrink-0">
								<Knot state={knot.state} x={0} y={0} />
							</svg>
							<span className="font-medium">{knot.word}</span>
							<span className="text-second">{knot.to === null ? knot.whyNot : knot.figure}</span>
						</>
					);
					const form = 'flex min-h-12 items-center gap-3 py-2 text-ink no-underline';
					return (
						<li key={knot.key} className="border-b border-rule">
							{knot.to === null ? (
								<span className={form}>{inside}</span>
							) : (
								<Link to={knot.to} className={form}>
									{inside}
									<span aria-hidden="true" className="ml-auto pr-1">
										›
									</span>
								</Link>
							)}
						</li>
					);
				})}
			</ul>
		</nav>
	);
}
