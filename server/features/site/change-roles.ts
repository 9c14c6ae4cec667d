import { and, eq, gt, inArray, isNull, or } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import type { Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { memberships } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Forbidden, foundOne, Refused } from '../../platform/refuse.ts';
import { bothSides } from './invite.ts';
import { areSeparate, mayName } from './naming.ts';
import { companyNameOf, hasHadOwnersRepresentative, heldBy, holdersOf, rolesOnSite, standing } from './standing.ts';

interface Given {
	userId: string;
	role: Role;
	companyId: string | null;
	isLead: boolean;
}

type World = Pick<Platform, 'newId' | 'now'>;

/** A further role for somebody who is on the site already; NOT_FOUND for anybody else. */
export async function giveRole(tx: Transaction, { newId, now }: World, member: Member, given: Given): Promise<string> {
	const at = now();
	await lockSite(tx, member.siteId);
	const { userId, role, companyId } = given;
	const held = await heldBy(tx, member, at);
	if (!mayName(held, { role, companyId }, await hasHadOwnersRepresentative(tx, member.siteId))) throw new Forbidden();
	await companyNameOf(tx, member.siteId, companyId);
	if (role === 'contractor' && companyId === null) throw new Refused('no-company', 'Say for which company.', 'companyId');
	const had = await rolesOnSite(tx, member.siteId, userId, at);
	foundOne(had);
	if (had.includes(role)) throw new Refused('already-member', 'This person already has that role here.', 'role');
	if (!areSeparate([...had, role])) throw new Refused('both-sides', bothSides, 'role');
	const membershipId = newId();
	const isLead = given.isLead && role === 'contractor';
	await tx
		.insert(memberships)
		.values({ id: membershipId, siteId: member.siteId, userId, role, companyId, isLead, fromAt: at, leftAt: null });
	await audit(tx, member, { kind: 'role-given', subjectId: userId, data: { role, companyId, isLead, before: had } });
	return membershipId;
}

/** These roles must never be without a holder: nobody could name the next. */
const neverEmpty: Partial<Record<Role, string>> = {
	'project-engineer': 'The site needs a project engineer. Invite the next one first.',
	'owners-representative': 'Only owner’s representatives name each other. Invite the next one first.',
};

/** Ends a role: of oneself, or of whom one may name. Past acts stay; deputies of it end with it. */
export async function endRole(tx: Transaction, { now }: World, member: Member, membershipId: string): Promise<void> {
	const at = now();
	await lockSite(tx, member.siteId);
	const row = foundOne(
		await tx
			.select()
			.from(memberships)
			.where(and(standing(member.siteId, at), eq(memberships.id, membershipId))),
	);
	const { userId, role, companyId, deputyFor } = row;
	const isOwn = userId === member.userId || deputyFor === member.userId;
	if (!isOwn && !mayName(await heldBy(tx, member, at), { role, companyId }, true)) throw new Forbidden();
	const reason = neverEmpty[role];
	if (reason !== undefined && deputyFor === null && (await holdersOf(tx, member.siteId, role)) === 1) throw new Refused('last-one', reason);
	const deputies = await tx
		.select({ id: memberships.id, userId: memberships.userId })
		.from(memberships)
		.where(and(standing(member.siteId, at), eq(memberships.deputyFor, userId), eq(memberships.role, role)));
	const ending = [membershipId, ...(deputyFor === null ? deputies.map(({ id }) => id) : [])];
	const ended = await tx
		.update(memberships)
		.set({ leftAt: at })
		.where(and(inArray(memberships.id, ending), or(isNull(memberships.leftAt), gt(memberships.leftAt, at))))
		.returning({ id: memberships.id });
	if (ended.length !== ending.length) throw new Conflict();
	await audit(tx, member, {
		kind: 'role-ended',
		subjectId: userId,
		data: { role, companyId, isOwnWish: userId === member.userId, deputiesEnded: ending.length - 1 },
	});
}
