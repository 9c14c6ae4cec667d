import { isRouteErrorResponse } from 'react-router-dom';
import { refusalOf } from '#src/lib/api-error.ts';

/** What a page that could not be shown says. */
export interface Fault {
	kind: 'signed-out' | 'not-yours' | 'new-version' | 'no-line' | 'wrong';
	headline: string;
	title: string;
	text: string;
}

/** Browsers say it each in their own words when a part of the program is no longer on the server. */
const missingChunk = /dynamically imported module|importing a module script failed|unable to preload css/i;

/** Sorts what was thrown under a page. */
export function faultOf(error: unknown): Fault {
	if (error instanceof Error && missingChunk.test(error.message)) {
		return {
			kind: 'new-version',
			headline: 'This page did not come',
			title: 'A newer Batterboard stands on the server, or the line broke.',
			text: 'Nothing you stored is lost. Load the page again; what is typed and not sent is lost then.',
		};
	}
	const refusal = isRouteErrorResponse(error) && error.status === 404 ? { code: 'NOT_FOUND', message: '' } : refusalOf(error);
	if (refusal.code === 'UNAUTHORIZED') return { kind: 'signed-out', headline: '', title: '', text: '' };
	if (refusal.code === 'NOT_FOUND' || refusal.code === 'FORBIDDEN' || refusal.code === 'BAD_REQUEST') {
		return {
			kind: 'not-yours',
			headline: 'Not there, or not yours to see',
			title: 'There is nothing at this address for you.',
			text: 'The address may be mistyped, the thing may be withdrawn, or your role on the site does not reach it. Ask who sent you the link.',
		};
	}
	if (refusal.code === 'NO_LINE')
		return { kind: 'no-line', headline: 'No line to the server', title: 'The server was not reached.', text: refusal.message };
	return { kind: 'wrong', headline: 'This page could not be shown', title: 'What it needs did not come.', text: refusal.message };
}
