import { and, eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import type { openInvitation } from '#shared/site/people-contract.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { users } from '../../db/schema/account.ts';
import { companies, invitations, memberships, sites } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform, SignedIn } from '../../platform/platform.ts';
import { Conflict, NotFound, Refused } from '../../platform/refuse.ts';
import { hashOfToken } from '../../platform/secret-token.ts';
import { bothSides, isOpen, waitingFor } from './invite.ts';
import { areSeparate } from './naming.ts';
import { rolesOnSite } from './standing.ts';

const doesNotHold = 'This invitation does not hold: it was used, replaced by a newer one, withdrawn, or its time is over.';

export interface FoundInvitation {
	row: typeof invitations.$inferSelect;
	/** The person of the invitation's address, where there is one. */
	knownUserId: string | null;
}

/** The open invitation of this token. Used, ended, over, altered and never given are the same answer: NOT_FOUND. */
export async function invitationOf(db: Handle, token: string, now: Date): Promise<FoundInvitation> {
	const [found] = await db
		.select({ row: invitations, knownUserId: users.id })
		.from(invitations)
		.leftJoin(users, eq(sql`lower(${users.email})`, invitations.email))
		.where(and(eq(invitations.tokenHash, hashOfToken(token)), isOpen(now)));
	if (found === undefined) throw new NotFound(doesNotHold);
	return found;
}

/** What its page says. */
export async function describeInvitation(db: Handle, token: string, now: Date): Promise<z.infer<typeof openInvitation>> {
	const { row, knownUserId } = await invitationOf(db, token, now);
	const [said] = await db
		.select({ siteName: sites.name, timeZone: sites.timeZone, inviterName: users.name })
		.from(sites)
		.innerJoin(users, eq(users.id, row.invitedBy))
		.where(eq(sites.id, row.siteId));
	if (said === undefined) throw new NotFound(doesNotHold);
	const nameOf = async (userId: string) => (await db.select({ name: users.name }).from(users).where(eq(users.id, userId)))[0]?.name ?? null;
	const company =
		row.companyId === null
			? undefined
			: (
					await db
						.select({ name: companies.name })
						.from(companies)
						.where(and(eq(companies.siteId, row.siteId), eq(companies.id, row.companyId)))
				)[0];
	return {
		...said,
		email: row.email,
		roles: row.roles,
		companyName: company?.name ?? null,
		deputyForName: row.deputyFor === null ? null : await nameOf(row.deputyFor),
		fromAt: row.fromAt,
		untilAt: row.untilAt,
		expiresAt: row.expiresAt,
		waits: await waitingFor(db, row, said.timeZone, now),
		isKnown: knownUserId !== null,
	};
}

/**
 * Uses the invitation up and writes the memberships. Of two at once the second is told that it no longer holds. REFUSED where the person
 * by now stands on the other side.
 */
export async function joinSite(
	tx: Transaction,
	{ newId, now }: Pick<Platform, 'newId' | 'now'>,
	person: SignedIn,
	{ row }: FoundInvitation,
): Promise<void> {
	const at = now();
	await lockSite(tx, row.siteId);
	const used = await tx
		.update(invitations)
		.set({ acceptedAt: at, acceptedBy: person.userId })
		.where(and(eq(invitations.id, row.id), eq(invitations.tokenHash, row.tokenHash), isOpen(at)))
		.returning({ id: invitations.id });
	if (used.length === 0) throw new NotFound(doesNotHold);
	const had = await rolesOnSite(tx, row.siteId, person.userId, at);
	if (!areSeparate([...had, ...row.roles])) throw new Refused('both-sides', bothSides);
	const fresh = row.deputyFor === null ? row.roles.filter((role) => !had.includes(role)) : row.roles;
	const fromAt = row.fromAt !== null && row.fromAt > at ? row.fromAt : at;
	if (row.untilAt !== null && row.untilAt <= fromAt) throw new Conflict('The time this invitation was for is over.');
	for (const role of fresh) {
		const isLead = row.isLead && role === 'contractor';
		const { siteId, companyId, deputyFor, untilAt: leftAt } = row;
		await tx.insert(memberships).values({ id: newId(), siteId, userId: person.userId, role, companyId, isLead, deputyFor, fromAt, leftAt });
	}
	const member: Member = { ...person, siteId: row.siteId, roles: row.roles, companyIds: row.companyId === null ? [] : [row.companyId] };
	const data = { invitationId: row.id, roles: row.roles, companyId: row.companyId };
	await audit(tx, member, { kind: 'invitation-accepted', subjectId: row.id, data });
	await audit(tx, member, { kind: 'member-added', subjectId: person.userId, data });
}

/** "Not me": the link ends, and the site's record says so. */
export async function declineInvitation(
	tx: Transaction,
	{ now }: Pick<Platform, 'now'>,
	by: SignedIn | { userId: null; address: string | null },
	token: string,
): Promise<void> {
	const { row } = await invitationOf(tx, token, now());
	const ended = await tx
		.update(invitations)
		.set({ endedAt: now(), isDeclined: true })
		.where(and(eq(invitations.id, row.id), isOpen(now())))
		.returning({ id: invitations.id });
	if (ended.length === 0) throw new NotFound(doesNotHold);
	await audit(tx, by, { kind: 'invitation-declined', subjectId: row.id, data: { email: row.email } }, row.siteId);
}
