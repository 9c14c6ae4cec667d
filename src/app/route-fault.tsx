import { useQueryErrorResetBoundary } from '@tanstack/react-query';
import { type ReactNode, useEffect } from 'react';
import { Link, Navigate, useLocation, useNavigate, useRouteError } from 'react-router-dom';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { faultOf } from './fault-of.ts';

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
