import { useState } from 'react';
import { Link, useLocation } from 'react-router-dom';
import { AskResetForm } from '#src/features/account/ask-reset-form.tsx';
import { ResetForm } from '#src/features/account/reset-form.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { Notice } from '#src/ui/notice.tsx';

/** Ask for a link; with the link, a new password. */
export default function ResetPage() {
	const token = useLocation().hash.slice(1);
	const [isDone, setIsDone] = useState(false);
	return (
		<div className="mx-auto flex min-h-dvh w-full max-w-100 flex-col px-4 pt-[12vh] pb-8">
			<header className="mb-6 flex items-center gap-2.5 text-lead font-heavy tracking-[-0.01em]">
				<Mark sizePx={36} />
				Batterboard
			</header>
			<main className="sheet px-5 py-5">
				<Headline title="New password">{token === '' ? 'A link to a new password' : 'Choose a new password'}</Headline>
				{isDone ? (
					<Notice kind="note" title="The password is set.">
						You are signed out everywhere.{' '}
						<Link to="/sign-in" className="text-action underline underline-offset-3">
							Sign in with it.
						</Link>
					</Notice>
				) : token === '' ? (
					<AskResetForm />
				) : (
					<ResetForm key={token} token={token} onDone={() => setIsDone(true)} />
				)}
			</main>
			<footer className="mt-4 text-small">
				<Link to="/sign-in" className="inline-flex text-action underline underline-offset-3 min-h-6 items-center pointer-coarse:min-h-12">
					To the sign-in
				</Link>
				{token !== '' && !isDone && (
					<Link
						to="/reset"
						className="ml-4 inline-flex text-action underline underline-offset-3 min-h-6 items-center pointer-coarse:min-h-12"
					>
						Another link
					</Link>
				)}
			</footer>
		</div>
	);
}
