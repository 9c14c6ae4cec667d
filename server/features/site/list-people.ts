import { and, asc, eq, isNull } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import { roles as allRoles, type Role } from '#shared/permissions.ts';
import type { People, SiteInvitation, SitePerson } from '#shared/site/people-contract.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { companies, invitations, memberships } from '../../db/schema/site.ts';
import type { Member } from '../../platform/platform.ts';
import { type Held, mayName } from './naming.ts';
import { hasHadOwnersRepresentative, heldBy, standing } from './standing.ts';

const holders = alias(users, 'holders');

/**
 * The site's people as this member may see them. A contractor sees its own company's people and those who lead the site, not the other
 * firms'; an address is shown to who may name the person, to its own company, and to engineers and owner's representatives.
 */
export async function peopleOf(db: Handle, member: Member, now: Date, isMailOn: boolean): Promise<People> {
	const held = await heldBy(db, member, now);
	const hasHad = await hasHadOwnersRepresentative(db, member.siteId);
	const may = (role: Role, companyId: string | null) => mayName(held, { role, companyId }, hasHad);
	const led = held.filter((one) => one.role === 'contractor' && one.isLead && !one.isDeputy).flatMap(({ companyId }) => companyId ?? []);
	const isEngineer = held.some(({ role }) => role === 'project-engineer');
	const every = await db.select({ id: companies.id }).from(companies).where(eq(companies.siteId, member.siteId));
	return {
		people: await seenPeople(db, member, now, may),
		invitations: await seenInvitations(db, member, now, may),
		nameableRoles: allRoles.filter((role) => (role === 'contractor' ? isEngineer || led.length > 0 : may(role, null))),
		nameableCompanyIds: isEngineer ? every.map(({ id }) => id) : led,
		deputisableRoles: ownRoles(held),
		isMailOn,
	};
}

function ownRoles(held: readonly Held[]): Role[] {
	return allRoles.filter((role) => role !== 'observer' && held.some((one) => one.role === role && !one.isDeputy));
}

type May = (role: Role, companyId: string | null) => boolean;

async function seenPeople(db: Handle, member: Member, now: Date, may: May): Promise<SitePerson[]> {
	const rows = await db
		.select({ row: memberships, name: users.name, email: users.email, companyName: companies.name, deputyForName: holders.name })
		.from(memberships)
		.innerJoin(users, eq(users.id, memberships.userId))
		.leftJoin(companies, and(eq(companies.siteId, memberships.siteId), eq(companies.id, memberships.companyId)))
		.leftJoin(holders, eq(holders.id, memberships.deputyFor))
		.where(standing(member.siteId, now))
		.orderBy(asc(users.name), asc(users.id), asc(memberships.role));
	const isOnlyContractor = member.roles.every((role) => role === 'contractor');
	const isOwnCompany = (companyId: string | null) => companyId !== null && member.companyIds.includes(companyId);
	const seen = rows.filter(({ row }) => !isOnlyContractor || row.role !== 'contractor' || isOwnCompany(row.companyId));
	const seesAddresses = member.roles.some((role) => role !== 'contractor' && role !== 'observer');
	return [...new Set(seen.map(({ row }) => row.userId))].map((userId) => {
		const own = seen.filter(({ row }) => row.userId === userId);
		const isMe = userId === member.userId;
		const mayWrite = isMe || seesAddresses || own.some(({ row }) => isOwnCompany(row.companyId) || may(row.role, row.companyId));
		return {
			userId,
			name: own[0]?.name ?? '',
			email: mayWrite ? (own[0]?.email ?? null) : null,
			holdings: own.map(({ row, companyName, deputyForName }) => ({
				membershipId: row.id,
				role: row.role,
				companyId: row.companyId,
				companyName,
				isLead: row.isLead,
				fromAt: row.fromAt,
				untilAt: row.leftAt,
				deputyForName,
				mayEnd: isMe || row.deputyFor === member.userId || may(row.role, row.companyId),
			})),
		};
	});
}

async function seenInvitations(db: Handle, member: Member, now: Date, may: May): Promise<SiteInvitation[]> {
	const rows = await db
		.select({ row: invitations, invitedByName: users.name, companyName: companies.name, deputyForName: holders.name })
		.from(invitations)
		.innerJoin(users, eq(users.id, invitations.invitedBy))
		.leftJoin(companies, and(eq(companies.siteId, invitations.siteId), eq(companies.id, invitations.companyId)))
		.leftJoin(holders, eq(holders.id, invitations.deputyFor))
		.where(and(eq(invitations.siteId, member.siteId), isNull(invitations.acceptedAt)))
		.orderBy(asc(invitations.email));
	return rows.flatMap(({ row, invitedByName, companyName, deputyForName }) => {
		const isMine = row.deputyFor === member.userId;
		const mayAll = row.deputyFor === null && row.roles.every((role) => may(role, row.companyId));
		// One that was withdrawn is in the record of acts, no longer here.
		if (!(isMine || mayAll) || (row.endedAt !== null && !row.isDeclined)) return [];
		return [
			{
				invitationId: row.id,
				email: row.email,
				roles: row.roles,
				companyName,
				deputyForName,
				invitedByName,
				sentAt: row.sentAt,
				expiresAt: row.expiresAt,
				state: row.isDeclined ? ('declined' as const) : row.expiresAt <= now ? ('over' as const) : ('open' as const),
			},
		];
	});
}
