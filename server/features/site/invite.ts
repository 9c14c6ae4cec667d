import { and, eq, gt, isNull, sql } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import type { Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { users } from '../../db/schema/account.ts';
import { invitations, sites } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { postMail } from '../../platform/post-mail.ts';
import { Conflict, Forbidden, foundOne, Refused } from '../../platform/refuse.ts';
import { newSecretToken } from '../../platform/secret-token.ts';
import { invitationLetter } from './invitation-letter.ts';
import { lineOf } from './line.ts';
import { areSeparate, mayName } from './naming.ts';
import { readLineFacts } from './read-line-facts.ts';
import { companyNameOf, hasHadOwnersRepresentative, heldBy, rolesOnSite } from './standing.ts';
import { whatWaits } from './what-waits.ts';

export const invitationDays = 14;

export interface Invited {
	email: string;
	roles: readonly Role[];
	companyId: string | null;
	isLead: boolean;
	deputy: { fromAt: Date; untilAt: Date } | null;
}

type World = Pick<Platform, 'newId' | 'now' | 'publicUrl' | 'mail'>;
type Row = typeof invitations.$inferSelect;

/** Open: may still be accepted. */
export function isOpen(now: Date) {
	return and(isNull(invitations.acceptedAt), isNull(invitations.endedAt), gt(invitations.expiresAt, now));
}

/**
 * Writes the invitation and its mail. FORBIDDEN where the member may not give one of the roles; REFUSED where the address already has the
 * role or an open invitation here, or where the roles, with those it has, would stand on both sides.
 */
export async function invite(tx: Transaction, world: World, member: Member, invited: Invited): Promise<string> {
	expectMail(world);
	const now = world.now();
	await lockSite(tx, member.siteId);
	await expectMayName(tx, member, invited, now);
	await companyNameOf(tx, member.siteId, invited.companyId);
	await expectRoom(tx, member.siteId, invited, now);
	const invitationId = world.newId();
	const { token, tokenHash } = newSecretToken();
	const row: Row = {
		id: invitationId,
		siteId: member.siteId,
		email: invited.email,
		roles: [...invited.roles],
		companyId: invited.companyId,
		isLead: invited.isLead && invited.roles.includes('contractor'),
		deputyFor: invited.deputy === null ? null : member.userId,
		fromAt: invited.deputy?.fromAt ?? null,
		untilAt: invited.deputy?.untilAt ?? null,
		tokenHash,
		invitedBy: member.userId,
		createdAt: now,
		sentAt: now,
		expiresAt: expiryFrom(now),
		acceptedAt: null,
		acceptedBy: null,
		endedAt: null,
		isDeclined: false,
	};
	await tx.insert(invitations).values(row);
	await postInvitation(tx, world, member.name, row, token);
	const { email, roles, companyId, isLead } = row;
	await audit(tx, member, {
		kind: invited.deputy === null ? 'member-invited' : 'deputy-named',
		subjectId: invitationId,
		data: { email, roles, companyId, isLead, ...(invited.deputy && { from: invited.deputy.fromAt, until: invited.deputy.untilAt }) },
	});
	return invitationId;
}

/** Anew with another link and another fortnight; the old link no longer holds. Also for one that is over or was declined. */
export async function sendAgain(tx: Transaction, world: World, member: Member, invitationId: string): Promise<void> {
	expectMail(world);
	const now = world.now();
	await lockSite(tx, member.siteId);
	const row = await nameableInvitation(tx, member, invitationId, now);
	const { token, tokenHash } = newSecretToken();
	const fresh = { tokenHash, sentAt: now, expiresAt: expiryFrom(now), endedAt: null, isDeclined: false };
	const sent = await tx
		.update(invitations)
		.set(fresh)
		.where(and(eq(invitations.id, row.id), isNull(invitations.acceptedAt)))
		.returning({ id: invitations.id });
	if (sent.length === 0) throw new Conflict('This invitation was just accepted.');
	await postInvitation(tx, world, member.name, { ...row, ...fresh }, token);
	await audit(tx, member, { kind: 'invitation-sent-again', subjectId: row.id, data: { email: row.email } });
}

/** The link no longer holds. CONFLICT where it was accepted a moment ago. */
export async function withdrawInvitation(
	tx: Transaction,
	{ now }: Pick<Platform, 'now'>,
	member: Member,
	invitationId: string,
): Promise<void> {
	await lockSite(tx, member.siteId);
	const row = await nameableInvitation(tx, member, invitationId, now());
	const ended = await tx
		.update(invitations)
		.set({ endedAt: now(), isDeclined: false })
		.where(and(eq(invitations.id, row.id), isNull(invitations.acceptedAt)))
		.returning({ id: invitations.id });
	if (ended.length === 0) throw new Conflict('This invitation was just accepted.');
	await audit(tx, member, { kind: 'invitation-withdrawn', subjectId: row.id, data: { email: row.email } });
}

function expiryFrom(now: Date): Date {
	return new Date(now.getTime() + invitationDays * 24 * 3_600_000);
}

function expectMail({ mail }: Pick<Platform, 'mail'>): void {
	if (!mail.isOn) throw new Refused('no-mail', 'No mail service is set on this server. Whoever runs it sets one; then invite.');
}

async function expectMayName(tx: Transaction, member: Member, { roles, companyId, deputy }: Invited, now: Date): Promise<void> {
	const held = await heldBy(tx, member, now);
	const hasHad = await hasHadOwnersRepresentative(tx, member.siteId);
	for (const role of roles) {
		const isOwn = held.some((one) => one.role === role && !one.isDeputy && one.companyId === companyId);
		if (deputy === null ? !mayName(held, { role, companyId }, hasHad) : !isOwn) throw new Forbidden();
	}
}

/** Refuses what accepting could not give. Says nothing of whether the address has an account: only of this site's own people. */
async function expectRoom(tx: Transaction, siteId: string, { email, roles, deputy }: Invited, now: Date): Promise<void> {
	const [person] = await tx
		.select({ id: users.id })
		.from(users)
		.where(eq(sql`lower(${users.email})`, email));
	const had = person === undefined ? [] : await rolesOnSite(tx, siteId, person.id, now);
	if (deputy === null && roles.every((role) => had.includes(role))) {
		throw new Refused('already-member', 'This person already has that role here.', 'email');
	}
	if (!areSeparate([...had, ...roles])) throw new Refused('both-sides', bothSides, 'email');
	const open = await tx
		.select({ id: invitations.id })
		.from(invitations)
		.where(and(eq(invitations.siteId, siteId), eq(invitations.email, email), isOpen(now)));
	if (open.length > 0)
		throw new Refused('already-invited', 'This address has an open invitation here. Send that one again, or withdraw it.', 'email');
}

export const bothSides = 'Nobody is owner’s representative and something else on the same site: who releases must not have done the work.';

/** An invitation of this site that the member might have written; NOT_FOUND for all others, so that nobody learns of them. */
async function nameableInvitation(tx: Transaction, member: Member, invitationId: string, now: Date): Promise<Row> {
	const row = foundOne(
		await tx
			.select()
			.from(invitations)
			.where(and(eq(invitations.siteId, member.siteId), eq(invitations.id, invitationId), isNull(invitations.acceptedAt))),
	);
	const held = await heldBy(tx, member, now);
	const hasHad = await hasHadOwnersRepresentative(tx, member.siteId);
	const isMine = row.deputyFor === member.userId;
	const mayAll = row.roles.every((role) => mayName(held, { role, companyId: row.companyId }, hasHad));
	return foundOne(isMine || (row.deputyFor === null && mayAll) ? [row] : []);
}

async function postInvitation(tx: Transaction, world: World, inviterName: string, row: Row, token: string): Promise<void> {
	const site = foundOne(await tx.select().from(sites).where(eq(sites.id, row.siteId)));
	const deputised = row.deputyFor === null ? [] : await tx.select({ name: users.name }).from(users).where(eq(users.id, row.deputyFor));
	const letter = invitationLetter({
		inviterName,
		siteName: site.name,
		timeZone: site.timeZone,
		roles: row.roles,
		companyName: await companyNameOf(tx, row.siteId, row.companyId),
		deputy:
			deputised[0] !== undefined && row.fromAt !== null && row.untilAt !== null
				? { forName: deputised[0].name, fromAt: row.fromAt, untilAt: row.untilAt }
				: null,
		waits: await waitingFor(tx, row, site.timeZone, world.now()),
		expiresAt: row.expiresAt,
		publicUrl: world.publicUrl(),
		token,
	});
	await postMail(tx, { to: row.email, letter, now: world.now() });
}

/** What a person of the invitation's roles and company would find on the site. */
export async function waitingFor(
	db: Transaction | Platform['db'],
	{ siteId, roles, companyId, email }: Pick<Row, 'siteId' | 'roles' | 'companyId' | 'email'>,
	timeZone: string,
	now: Date,
): Promise<string> {
	const asMember: Member = { userId: '', name: '', email, siteId, roles, companyIds: companyId === null ? [] : [companyId] };
	return whatWaits(roles, lineOf(await readLineFacts(db, asMember), now, timeZone));
}
