import type { Line as SiteLineState } from '#shared/site/contract.ts';
import { Line, type LineKnot } from '#src/ui/line.tsx';

/** The seven places of a site's work. */
export type Place = SiteLineState['knots'][number]['knot'];

const words: Record<Place, string> = {
	model: 'Model',
	control: 'Control',
	surveys: 'Surveys',
	check: 'Check',
	flags: 'Flags',
	pours: 'Pours',
	records: 'Records',
};

/** A site's line as knots with their addresses: "Check" leads to the newest check where there is one. */
export function knotsOf(siteId: string, line: SiteLineState): LineKnot[] {
	return line.knots.map(({ knot, state, figure }) => {
		const path = knot === 'check' && line.newestCheckId !== null ? `checks/${line.newestCheckId}` : knot;
		return { key: knot, word: words[knot], figure, state, to: `/sites/${siteId}/${path}` };
	});
}

/** The line of a site, hanging at the place in hand. */
export function SiteLine({ siteId, line, place }: { siteId: string; line: SiteLineState; place: Place | null }) {
	return <Line knots={knotsOf(siteId, line)} placeKey={place} isTaut={line.isTaut} />;
}
