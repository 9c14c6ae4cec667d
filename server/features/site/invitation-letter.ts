import type { Role } from '#shared/permissions.ts';
import type { Letter } from '../../platform/letter.ts';

const roleNames: Record<Role, string> = {
	'site-engineer': 'site engineer',
	'project-engineer': 'project engineer',
	contractor: 'contractor',
	'owners-representative': 'owner’s representative',
	observer: 'observer',
};

interface InvitationFacts {
	inviterName: string;
	siteName: string;
	timeZone: string;
	roles: readonly Role[];
	companyName: string | null;
	deputy: { forName: string; fromAt: Date; untilAt: Date } | null;
	waits: string;
	expiresAt: Date;
	publicUrl: string;
	token: string;
}

/** The token stands behind the #: browsers send it to no server, so it is in no log and no Referer. */
export function invitationLetter(facts: InvitationFacts): Letter {
	const { inviterName, siteName, timeZone, roles, companyName, deputy, waits, expiresAt, publicUrl, token } = facts;
	const asWhat = roles.map((role) => roleNames[role]).join(' and ');
	const forWhom = companyName === null ? '' : ` for ${companyName}`;
	const inStead = deputy === null ? '' : `, in the stead of ${deputy.forName}`;
	return {
		subject: `${inviterName} invites you to ${siteName}`,
		headline: `${inviterName} invites you to ${siteName} as ${asWhat}${forWhom}${inStead}`,
		paragraphs: [
			...(deputy === null ? [] : [`From ${dayText(deputy.fromAt, timeZone)} until ${dayText(deputy.untilAt, timeZone)}.`]),
			waits,
		],
		act: { word: 'See the invitation', url: `${publicUrl}/invitation#${token}` },
		notes: [
			{ words: `The link is yours alone, for one use, until ${dayText(expiresAt, timeZone)}.` },
			{ words: 'Not you, or not expected? Say so:', url: `${publicUrl}/invitation?not-me=yes#${token}` },
		],
	};
}

/** "Fri 5 Dec 2026, 17:00" by the site's clock. */
function dayText(at: Date, timeZone: string): string {
	const day = new Intl.DateTimeFormat('en-GB', { weekday: 'short', day: 'numeric', month: 'short', year: 'numeric', timeZone });
	const hour = new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit', hourCycle: 'h23', timeZone });
	return `${day.format(at).replace(',', '')}, ${hour.format(at)}`;
}
