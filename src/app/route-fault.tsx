import { useQueryErrorResetBoundary } from '@tanstack/react-query';
import { type ReactNode, useEffect } from 'react';
import { isRouteErrorResponse, Link, Navigate, useLocation, useNavigate, useRouteError } from 'react-router-dom';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { Notice } from '#src/ui/notice.tsx';

/** What a page shows when it could not be shown: whose fault, what was kept, what to do. `isWhole`: there is no head around it. */
export function RouteFault({ isWhole = false }: { isWhole?: boolean }) {
	const error = useRouteError();
	const location = useLocation();
	const navigate = useNavigate();
	const { reset } = useQueryErrorResetBoundary();
	useEffect(() => {
		// A fault of ours is for whoever reads the console; refusals are not faults.
		if (refusalOf(error).code === 'FAULT') console.error(error);
	}, [error]);
	const again = () => {
		reset();
		navigate(location.pathname + location.search, { replace: true });
	};
	const fault = faultOf(error);
	if (fault.kind === 'signed-out')
		return <Navigate replace to={`/sign-in?back=${encodeURIComponent(location.pathname + location.search)}`} />;
	const act =
		fault.kind === 'new-version' ? (
			<Button weight="act" onClick={() => window.location.reload()}>
				Load the page again
			</Button>
		) : fault.kind === 'not-yours' ? (
			<ButtonLink to="/sites" weight="act">
				To your sites
			</ButtonLink>
		) : (
			<Button weight="act" onClick={again}>
				Try again
			</Button>
		);
	return (
		<Around isWhole={isWhole}>
			<Headline>{fault.headline}</Headline>
			<Notice kind={fault.kind === 'no-line' ? 'no-line' : 'wrong'} title={fault.title} act={act}>
				{fault.text}
			</Notice>
		</Around>
	);
}

function Around({ isWhole, children }: { isWhole: boolean; children: ReactNode }) {
	if (!isWhole) return children;
	return (
		<div className="px-4 py-4 tablet:px-6">
			<header className="mb-6">
				<Link to="/sites" className="inline-flex items-center gap-2.5 text-lead font-heavy text-ink no-underline">
					<Mark />
					Batterboard
				</Link>
			</header>
			<main>{children}</main>
		</div>
	);
}

interface Fault {
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
