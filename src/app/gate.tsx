import { useSuspenseQuery } from '@tanstack/react-query';
import { Suspense } from 'react';
import { Navigate, Outlet, useLocation } from 'react-router-dom';
import { api } from '#src/lib/api.ts';
import { LoadingPage } from './loading-page.tsx';

/** Lets in who is signed in; all others go to the sign-in page, which brings them back to where they wanted to go. */
export function Gate() {
	return (
		<Suspense fallback={<LoadingPage />}>
			<GateOpen />
		</Suspense>
	);
}

function GateOpen() {
	const { pathname, search } = useLocation();
	const { data: me } = useSuspenseQuery(api.account.me.queryOptions());
	if (me !== null) return <Outlet />;
	const wanted = pathname + search;
	return <Navigate replace to={wanted === '/' || wanted === '/sites' ? '/sign-in' : `/sign-in?back=${encodeURIComponent(wanted)}`} />;
}
