import type { MailboxMail } from '#shared/mail/contract.ts';
import { isoMoment } from '#src/lib/format.ts';

const hereZone = () => Intl.DateTimeFormat().resolvedOptions().timeZone;

interface MailboxListProps {
	mails: readonly MailboxMail[];
	openId: string | null;
	onOpen: (keptId: string | null) => void;
}

/** Mails below one another; the open one shows its text, its links as links. */
export function MailboxList({ mails, openId, onOpen }: MailboxListProps) {
	return (
		<ul className="m-0 list-none border-t border-rule p-0">
			{mails.map((mail) => {
				const isOpen = mail.keptId === openId;
				return (
					<li key={mail.keptId} className="border-b border-rule">
						<button
							type="button"
							aria-expanded={isOpen}
							onClick={() => onOpen(isOpen ? null : mail.keptId)}
							className="flex min-h-14 w-full flex-wrap items-baseline gap-x-4 py-2 text-left hover:bg-hair"
						>
							<span className="min-w-0 font-strong break-words">{mail.subject}</span>
							<span className="min-w-0 text-second break-all">to {mail.to}</span>
							<span className="text-second tablet:ml-auto">{isoMoment(mail.at, hereZone())}</span>
						</button>
						{isOpen && <MailText mail={mail} />}
					</li>
				);
			})}
		</ul>
	);
}

function MailText({ mail }: { mail: MailboxMail }) {
	return (
		<article className="sheet mb-4 px-4.5 py-4">
			{mail.text.split('\n\n').map((paragraph) => (
				<p key={paragraph} className="m-0 mb-3 whitespace-pre-line break-words">
					{paragraph.split(/(https?:\/\/\S+)/).map((part) =>
						/^https?:\/\//.test(part) ? (
							<a
								key={part}
								href={part}
								className="inline-flex text-action underline underline-offset-3 min-h-6 items-center break-all pointer-coarse:min-h-12"
							>
								{part}
							</a>
						) : (
							part
						),
					)}
				</p>
			))}
			<a
				href={`/api/mailbox/${mail.keptId}`}
				target="_blank"
				rel="noreferrer"
				className="inline-flex text-action underline underline-offset-3 min-h-6 items-center pointer-coarse:min-h-12"
			>
				As a mail program shows it
			</a>
		</article>
	);
}
