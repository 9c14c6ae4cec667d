import type { z } from 'zod';
import type { Role } from '#shared/permissions.ts';
import type { inviteInput } from '#shared/site/people-contract.ts';
import { siteRoutes as ofSite, openRoutes } from '../../platform/guard.ts';
import { Refused } from '../../platform/refuse.ts';
import type { Tries } from '../../platform/tries.ts';
import { declineInvitation, describeInvitation } from './accept.ts';
import { endRole, giveRole } from './change-roles.ts';
import { addCompany, renameCompany } from './companies.ts';
import { invite, sendAgain, withdrawInvitation } from './invite.ts';
import { peopleOf } from './list-people.ts';

/** Within a quarter of an hour: mails one person may cause, and links one network address may try. */
const limits = { mailsPerPerson: 40, linksPerAddress: 60 };

/** False where this person has caused too many mails. */
function mayMail(tries: Tries, userId: string): boolean {
	return tries.take(`mails by ${userId}`, limits.mailsPerPerson);
}

/** False where this address has tried too many links. */
export function mayTryLink(tries: Tries, address: string): boolean {
	return tries.take(`links from ${address}`, limits.linksPerAddress);
}

function rolesOf(role: z.output<typeof inviteInput>['role']): Role[] {
	return role === 'both-engineers' ? ['site-engineer', 'project-engineer'] : [role];
}

const done = { done: true } as const;

/** Accepting also writes accounts: `server/workflows/accept-invitation.ts`. */
export const peopleRoutes = {
	people: ofSite.site.people.handler(({ context: { platform, member } }) =>
		peopleOf(platform.db, member, platform.now(), platform.mail.isOn),
	),
	invite: ofSite.site.invite.handler(async ({ input, errors, context: { platform, member, tries } }) => {
		if (!mayMail(tries, member.userId)) throw errors.TOO_MANY();
		const { email, companyId, isLead } = input;
		if (input.role === 'contractor' && companyId === null) throw new Refused('no-company', 'Say for which company.', 'companyId');
		const invited = { email, roles: rolesOf(input.role), companyId, isLead, deputy: null };
		return { invitationId: await platform.transaction((tx) => invite(tx, platform, member, invited)) };
	}),
	sendAgain: ofSite.site.sendAgain.handler(async ({ input, errors, context: { platform, member, tries } }) => {
		if (!mayMail(tries, member.userId)) throw errors.TOO_MANY();
		await platform.transaction((tx) => sendAgain(tx, platform, member, input.invitationId));
		return done;
	}),
	withdrawInvitation: ofSite.site.withdrawInvitation.handler(async ({ input, context: { platform, member } }) => {
		await platform.transaction((tx) => withdrawInvitation(tx, platform, member, input.invitationId));
		return done;
	}),
	giveRole: ofSite.site.giveRole.handler(async ({ input, context: { platform, member } }) => ({
		membershipId: await platform.transaction((tx) => giveRole(tx, platform, member, input)),
	})),
	endRole: ofSite.site.endRole.handler(async ({ input, context: { platform, member } }) => {
		await platform.transaction((tx) => endRole(tx, platform, member, input.membershipId));
		return done;
	}),
	nameDeputy: ofSite.site.nameDeputy.handler(async ({ input, errors, context: { platform, member, tries } }) => {
		if (!mayMail(tries, member.userId)) throw errors.TOO_MANY();
		const { email, role, fromAt, untilAt } = input;
		if (untilAt <= fromAt || untilAt <= platform.now())
			throw new Refused('no-time', 'The end must lie ahead, and after the beginning.', 'untilAt');
		const companyId = role === 'contractor' ? (member.companyIds[0] ?? null) : null;
		const invited = { email, roles: [role], companyId, isLead: false, deputy: { fromAt, untilAt } };
		return { invitationId: await platform.transaction((tx) => invite(tx, platform, member, invited)) };
	}),
	addCompany: ofSite.site.addCompany.handler(async ({ input, context: { platform, member } }) => ({
		companyId: await platform.transaction((tx) => addCompany(tx, platform, member, input.name)),
	})),
	renameCompany: ofSite.site.renameCompany.handler(async ({ input, context: { platform, member } }) => {
		await platform.transaction((tx) => renameCompany(tx, member, input.companyId, input.name));
		return done;
	}),
	openInvitation: openRoutes.site.openInvitation.handler(async ({ input, errors, context: { platform, tries, address } }) => {
		if (!mayTryLink(tries, address)) throw errors.TOO_MANY();
		return describeInvitation(platform.db, input.token, platform.now());
	}),
	declineInvitation: openRoutes.site.declineInvitation.handler(
		async ({ input, errors, context: { platform, tries, address, signedIn } }) => {
			if (!mayTryLink(tries, address)) throw errors.TOO_MANY();
			await platform.transaction((tx) => declineInvitation(tx, platform, signedIn ?? { userId: null, address }, input.token));
			return done;
		},
	),
};
