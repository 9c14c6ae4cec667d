import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { MailboxList } from '#src/features/mail/mailbox-list.tsx';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { errorCode, refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** The local fake's mailbox: where links go while no real mail service is named. */
export default function MailboxPage() {
	const [openId, open] = useAddressState('mail', 'push');
	const { data: mails, error } = useQuery({ ...api.mail.mailbox.queryOptions(), refetchInterval: 3000 });
	return (
		<div className="mx-auto w-full max-w-180 px-4 pt-4 pb-10">
			<header className="mb-6">
				<Link
					to="/sites"
					className="inline-flex min-h-12 items-center gap-2.5 text-lead font-heavy tracking-[-0.01em] text-ink no-underline"
				>
					<Mark />
					Batterboard
				</Link>
			</header>
			<main>
				<Strip items={['kept on this machine', 'anybody who reaches it reads it', 'off with a real mail service, and with DEMO=off']} />
				<Headline title="Mailbox">
					{mails === undefined ? 'Mailbox' : mails.length === 0 ? 'No mail yet' : counted(mails.length, 'mail')}
				</Headline>
				{error !== null && mails === undefined ? (
					errorCode(error) === 'NOT_FOUND' ? (
						<Notice kind="empty" title="There is no mailbox on this server.">
							Its mails go to the people themselves.
						</Notice>
					) : (
						<Notice kind="wrong" title="The mailbox did not come.">
							{refusalOf(error).message}
						</Notice>
					)
				) : mails === undefined ? (
					<LoadingLines what="The mails" rowHeightPx={56} />
				) : mails.length === 0 ? (
					<Notice kind="empty" title="Nothing was sent from here so far.">
						Invite somebody to a site, or ask for a new password: the mail stands here a moment later.
					</Notice>
				) : (
					<MailboxList mails={mails} openId={openId} onOpen={open} />
				)}
			</main>
		</div>
	);
}
