import { and, eq, gt, isNull, lte, or, sql } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import type { Handle } from '../../db/database.ts';
import { companies, memberships } from '../../db/schema/site.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';
import type { Held } from './naming.ts';

/** True for rows that hold now or will hold, on this site. */
export function standing(siteId: string, now: Date) {
	return and(eq(memberships.siteId, siteId), or(isNull(memberships.leftAt), gt(memberships.leftAt, now)));
}

/** What a member holds now, as the policy of naming asks it. */
export async function heldBy(db: Handle, { siteId, userId }: Pick<Member, 'siteId' | 'userId'>, now: Date): Promise<Held[]> {
	const rows = await db
		.select()
		.from(memberships)
		.where(and(standing(siteId, now), eq(memberships.userId, userId), lte(memberships.fromAt, now)));
	return rows.map(({ role, companyId, isLead, deputyFor }) => ({ role, companyId, isLead, isDeputy: deputyFor !== null }));
}

/** Whether anybody was ever the owner's representative here, also one who left. */
export async function hasHadOwnersRepresentative(db: Handle, siteId: string): Promise<boolean> {
	const rows = await db
		.select({ id: memberships.id })
		.from(memberships)
		.where(and(eq(memberships.siteId, siteId), eq(memberships.role, 'owners-representative')))
		.limit(1);
	return rows.length > 0;
}

/** The roles that somebody holds or will hold here, by person or by address. */
export async function rolesOnSite(db: Handle, siteId: string, userId: string, now: Date): Promise<Role[]> {
	const rows = await db
		.select({ role: memberships.role })
		.from(memberships)
		.where(and(standing(siteId, now), eq(memberships.userId, userId)));
	return rows.map(({ role }) => role);
}

/** The company's name where it is one of this site; NOT_FOUND where it is another's. */
export async function companyNameOf(db: Handle, siteId: string, companyId: string | null): Promise<string | null> {
	if (companyId === null) return null;
	const rows = await db
		.select({ name: companies.name })
		.from(companies)
		.where(and(eq(companies.siteId, siteId), eq(companies.id, companyId)));
	return foundOne(rows).name;
}

/** How many hold the role in their own right, now and without an end. */
export async function holdersOf(db: Handle, siteId: string, role: Role): Promise<number> {
	const [row] = await db
		.select({ holders: sql<number>`count(*)::int` })
		.from(memberships)
		.where(and(eq(memberships.siteId, siteId), eq(memberships.role, role), isNull(memberships.leftAt), isNull(memberships.deputyFor)));
	return row?.holders ?? 0;
}
