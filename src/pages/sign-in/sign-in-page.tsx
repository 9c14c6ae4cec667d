import { useQuery } from '@tanstack/react-query';
import { Link, Navigate, useNavigate, useSearchParams } from 'react-router-dom';
import { SignInWays } from '#src/features/account/sign-in-ways.tsx';
import { api } from '#src/lib/api.ts';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { backOf } from './back-of.ts';

/** Sign in, and go on to where one wanted to go. */
export default function SignInPage() {
	const [parameters] = useSearchParams();
	const navigate = useNavigate();
	const back = backOf(parameters.get('back'));
	const { data: me } = useQuery(api.account.me.queryOptions());
	if (me) return <Navigate to={back} replace />;
	return (
		<div className="mx-auto flex min-h-dvh w-full max-w-100 flex-col px-4 pt-[12vh] pb-8">
			<header className="mb-6 flex items-center gap-2.5 text-lead font-heavy tracking-[-0.01em]">
				<Mark sizePx={36} />
				Batterboard
			</header>
			<main className="sheet px-5 py-5">
				<Headline title="Sign in">Near enough to the design?</Headline>
				<p className="m-0 mb-5 text-second">
					{back === '/sites' ? 'Sign in to see your sites.' : 'Sign in; you will be brought to the page you asked for.'}
				</p>
				<SignInWays onSignedIn={() => navigate(back, { replace: true })} />
			</main>
			<footer className="mt-4 text-small text-second">
				<Link to="/reset" className="inline-flex text-action underline underline-offset-3 min-h-6 items-center pointer-coarse:min-h-12">
					Forgot your password?
				</Link>
				<p className="m-0 mt-2">No account? Whoever leads your site invites you.</p>
			</footer>
		</div>
	);
}
