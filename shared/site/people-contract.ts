import { z } from 'zod';
import { newPassword } from '../account/password-rule.ts';
import { base, plainText, siteInput } from '../base-contract.ts';
import { roles } from '../permissions.ts';

const role = z.enum(roles);

/** An address as it is kept and compared: lower case. */
export const emailAddress = z.string().trim().toLowerCase().pipe(z.email('Write an e-mail address.').max(200));

/** What goes along in the link; nothing else opens an invitation. */
export const secretToken = z.string().regex(/^[\w-]{43}$/, 'This link is not whole.');

export const holding = z.object({
	membershipId: z.uuid(),
	role,
	companyName: z.string().nullable(),
	companyId: z.uuid().nullable(),
	/** Leads the company's people on this site. */
	isLead: z.boolean(),
	fromAt: z.date(),
	/** Null: until ended. */
	untilAt: z.date().nullable(),
	deputyForName: z.string().nullable(),
	/** Whether the one who asks may end it. */
	mayEnd: z.boolean(),
});
export const sitePerson = z.object({
	userId: z.uuid(),
	name: z.string(),
	/** Null where it is not for the one who asks. */
	email: z.string().nullable(),
	holdings: z.array(holding),
});
export const siteInvitation = z.object({
	invitationId: z.uuid(),
	email: z.string(),
	roles: z.array(role),
	companyName: z.string().nullable(),
	deputyForName: z.string().nullable(),
	invitedByName: z.string(),
	sentAt: z.date(),
	expiresAt: z.date(),
	state: z.enum(['open', 'over', 'declined']),
});
export const people = z.object({
	people: z.array(sitePerson),
	/** Those that the one who asks may send again or withdraw. */
	invitations: z.array(siteInvitation),
	/** Which roles the one who asks may give; a contractor only within `nameableCompanyIds`. */
	nameableRoles: z.array(role),
	nameableCompanyIds: z.array(z.uuid()),
	/** Roles the one who asks holds in their own right, for which a deputy can be named. */
	deputisableRoles: z.array(role),
	/** False: no mail service is set on this server, so nobody can be invited. */
	isMailOn: z.boolean(),
});
export type People = z.infer<typeof people>;
export type SitePerson = z.infer<typeof sitePerson>;
export type SiteInvitation = z.infer<typeof siteInvitation>;

/** One role; site and project engineer may be one person, so both may be asked in one invitation. */
export const invitedRoles = z.enum([...roles, 'both-engineers']);
export const inviteInput = siteInput.extend({
	email: emailAddress,
	role: invitedRoles,
	companyId: z.uuid().nullable(),
	isLead: z.boolean(),
});
export const giveRoleInput = siteInput.extend({ userId: z.uuid(), role, companyId: z.uuid().nullable(), isLead: z.boolean() });
export const nameDeputyInput = siteInput.extend({ email: emailAddress, role, fromAt: z.date(), untilAt: z.date() });
export const acceptInput = z.strictObject({
	token: secretToken,
	/** Asked only of a person who is new here. */
	newPerson: z.strictObject({ name: plainText(80), password: newPassword }).nullable(),
});

/** What a link opens, before anything is accepted. */
export const openInvitation = z.object({
	siteName: z.string(),
	inviterName: z.string(),
	email: z.string(),
	roles: z.array(role),
	companyName: z.string().nullable(),
	deputyForName: z.string().nullable(),
	fromAt: z.date().nullable(),
	untilAt: z.date().nullable(),
	expiresAt: z.date(),
	timeZone: z.string(),
	/** What waits on the site for such a role, in a sentence. */
	waits: z.string(),
	/** A known person signs in; a new one says a name and a password. */
	isKnown: z.boolean(),
});
export type OpenInvitation = z.infer<typeof openInvitation>;

const tooMany = { TOO_MANY: { status: 429, message: 'Too many tries. Wait a quarter of an hour, then try again.' } };
const byLink = base.meta({ permission: 'public' }).errors({
	...tooMany,
	NOT_FOUND: {
		status: 404,
		message: 'This invitation does not hold: it was used, replaced by a newer one, withdrawn, or its time is over.',
	},
});
const done = z.object({ done: z.literal(true) });

export const peopleContract = {
	people: base.meta({ permission: 'site.see' }).input(siteInput).output(people),
	invite: base
		.meta({ permission: 'member.write' })
		.errors(tooMany)
		.input(inviteInput)
		.output(z.object({ invitationId: z.uuid() })),
	sendAgain: base
		.meta({ permission: 'member.write' })
		.errors(tooMany)
		.input(siteInput.extend({ invitationId: z.uuid() }))
		.output(done),
	withdrawInvitation: base
		.meta({ permission: 'member.write' })
		.input(siteInput.extend({ invitationId: z.uuid() }))
		.output(done),
	giveRole: base
		.meta({ permission: 'member.write' })
		.input(giveRoleInput)
		.output(z.object({ membershipId: z.uuid() })),
	/** Anybody may leave; whom else one may send away is the policy's. */
	endRole: base
		.meta({ permission: 'site.see' })
		.input(siteInput.extend({ membershipId: z.uuid() }))
		.output(done),
	nameDeputy: base
		.meta({ permission: 'deputy.name' })
		.errors(tooMany)
		.input(nameDeputyInput)
		.output(z.object({ invitationId: z.uuid() })),
	addCompany: base
		.meta({ permission: 'company.write' })
		.input(siteInput.extend({ name: plainText(80) }))
		.output(z.object({ companyId: z.uuid() })),
	renameCompany: base
		.meta({ permission: 'company.write' })
		.input(siteInput.extend({ companyId: z.uuid(), name: plainText(80) }))
		.output(done),
	openInvitation: byLink.input(z.strictObject({ token: secretToken })).output(openInvitation),
	acceptInvitation: byLink.input(acceptInput).output(z.object({ siteId: z.uuid() })),
	declineInvitation: byLink.input(z.strictObject({ token: secretToken })).output(done),
};
