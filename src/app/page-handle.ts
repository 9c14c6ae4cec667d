import { useMatches } from 'react-router-dom';
import type { Place } from '#src/features/site/site-line.tsx';

/** What the frame round a page knows of it. */
export interface PageHandle {
	/** The knot it hangs from; null on the site's first page. */
	place: Place | null;
	/** The way back on a phone, below `/sites/:siteId/`, with the address's own parts by name; without it the site's first page. */
	back?: { path: string; word: string };
}

/** The innermost page's handle. */
export function usePageHandle(): PageHandle {
	const handles = useMatches().flatMap((match) => (isPageHandle(match.handle) ? [match.handle] : []));
	return handles.at(-1) ?? { place: null };
}

function isPageHandle(handle: unknown): handle is PageHandle {
	return typeof handle === 'object' && handle !== null && 'place' in handle;
}
