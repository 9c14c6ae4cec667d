import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, useLocation, useNavigate, useSearchParams } from 'react-router-dom';
import { NewPersonForm } from '#src/features/account/new-person-form.tsx';
import { SignInWays } from '#src/features/account/sign-in-ways.tsx';
import { InvitationCard } from '#src/features/site/invitation-card.tsx';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';

/** What a mailed link opens: who invites to what; a new person begins here, a known one signs in; or "not me". */
export default function InvitationPage() {
	const token = useLocation().hash.slice(1);
	return (
		<div className="mx-auto flex min-h-dvh w-full max-w-130 flex-col px-4 pt-[8vh] pb-8">
			<header className="mb-6 flex items-center gap-2.5 text-lead font-heavy tracking-[-0.01em]">
				<Mark sizePx={36} />
				Batterboard
			</header>
			<main className="sheet px-5 py-5">
				<Invitation key={token} token={token} />
			</main>
		</div>
	);
}

function Invitation({ token }: { token: string }) {
	const { data, error } = useQuery(api.site.openInvitation.queryOptions({ input: { token }, staleTime: Number.POSITIVE_INFINITY }));
	const { data: me } = useQuery(api.account.me.queryOptions());
	const [parameters] = useSearchParams();
	if (error !== null) {
		return (
			<>
				<Headline title="Invitation">This link does not hold</Headline>
				<Notice kind="wrong" title={refusalOf(error).message}>
					Ask whoever invited you to send it again: it takes one press. If you accepted it before,{' '}
					<Link to="/sign-in" className="text-action underline underline-offset-3">
						sign in
					</Link>
					.
				</Notice>
			</>
		);
	}
	if (data === undefined || me === undefined) return <LoadingLines what="The invitation" />;
	const isSomebodyElse = me !== null && me.email.toLowerCase() !== data.email;
	return (
		<>
			<InvitationCard invitation={data} />
			{parameters.get('not-me') !== null ? (
				<NotMe token={token} />
			) : isSomebodyElse ? (
				<SomebodyElse email={data.email} meEmail={me.email} />
			) : (
				<Accept token={token} isKnown={data.isKnown} isSignedIn={me !== null} />
			)}
		</>
	);
}

function Accept({ token, isKnown, isSignedIn }: { token: string; isKnown: boolean; isSignedIn: boolean }) {
	const queries = useQueryClient();
	const navigate = useNavigate();
	const accept = useMutation(
		api.site.acceptInvitation.mutationOptions({
			onSuccess: async ({ siteId }) => {
				await queries.invalidateQueries({ queryKey: api.account.me.queryKey() });
				await queries.invalidateQueries({ queryKey: api.site.list.key() });
				navigate(`/sites/${siteId}`, { replace: true });
			},
		}),
	);
	if (!isKnown) return <NewPersonForm onSend={(newPerson) => accept.mutateAsync({ token, newPerson })} />;
	if (!isSignedIn) {
		return (
			<>
				<p className="m-0 mb-3">This address has an account here. Sign in with it, then accept.</p>
				<SignInWays onSignedIn={() => undefined} />
			</>
		);
	}
	return (
		<>
			{accept.error !== null && (
				<p role="alert" className="m-0 mb-3 border-l-[7px] border-l-ink pl-3 font-medium">
					{refusalOf(accept.error).message}
				</p>
			)}
			<Button weight="act" isBusy={accept.isPending} onClick={() => accept.mutate({ token, newPerson: null })}>
				Accept
			</Button>
		</>
	);
}

function SomebodyElse({ email, meEmail }: { email: string; meEmail: string }) {
	const queries = useQueryClient();
	const signOut = useMutation(
		api.account.signOut.mutationOptions({ onSuccess: () => queries.setQueryData(api.account.me.queryKey(), null) }),
	);
	return (
		<Notice
			kind="note"
			title={`This went to ${email}, and you are signed in as ${meEmail}.`}
			act={
				<Button weight="act" isBusy={signOut.isPending} onClick={() => signOut.mutate({})}>
					Sign out and go on
				</Button>
			}
		>
			An invitation is for the one it was sent to.
		</Notice>
	);
}

function NotMe({ token }: { token: string }) {
	const decline = useMutation(api.site.declineInvitation.mutationOptions());
	const [, setParameters] = useSearchParams();
	if (decline.isSuccess) {
		return (
			<Notice kind="note" title="Thank you. The link no longer holds.">
				Whoever sent it sees that it did not reach the right person. Nothing else of you is kept.
			</Notice>
		);
	}
	return (
		<Notice
			kind={decline.error === null ? 'note' : 'wrong'}
			title={decline.error === null ? 'Are you not the one who is meant?' : refusalOf(decline.error).message}
			act={
				<>
					<Button weight="act" isBusy={decline.isPending} onClick={() => decline.mutate({ token })}>
						Not me: end the link
					</Button>
					<Button onClick={() => setParameters({}, { replace: true })}>It is me</Button>
				</>
			}
		>
			The link ends, and the site’s record says so.
		</Notice>
	);
}
