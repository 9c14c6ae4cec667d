import type { OpenInvitation } from '#shared/site/people-contract.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { Headline } from '#src/ui/headline.tsx';
import { roleWords } from './role-words.ts';

/** Who invites to what, as what, for whom; and what waits there. */
export function InvitationCard({ invitation }: { invitation: OpenInvitation }) {
	const now = useNow();
	const { siteName, inviterName, roles, companyName, deputyForName, fromAt, untilAt, expiresAt, timeZone, waits, email } = invitation;
	const facts: [string, string][] = [
		['As', [roleWords(roles), companyName].filter(Boolean).join(', ')],
		...(deputyForName !== null && fromAt !== null && untilAt !== null
			? ([['In the stead of', `${deputyForName}, ${moment(fromAt, timeZone, now)} until ${moment(untilAt, timeZone, now)}`]] as [
					string,
					string,
				][])
			: []),
		['Sent to', email],
		['Holds until', moment(expiresAt, timeZone, now)],
	];
	return (
		<>
			<Headline title="Invitation">{`${inviterName} invites you to ${siteName}`}</Headline>
			<p className="m-0 mb-3">{waits}</p>
			<dl className="m-0 mb-5 grid grid-cols-[auto_1fr] gap-x-4 gap-y-1">
				{facts.map(([word, fact]) => (
					<div key={word} className="contents">
						<dt className="text-second">{word}</dt>
						<dd className="m-0 min-w-0 break-words">{fact}</dd>
					</div>
				))}
			</dl>
		</>
	);
}
