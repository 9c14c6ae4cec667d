import { and, asc, eq, gt, inArray, isNull, lte, ne, or, type SQL } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import type { Handle } from '../db/database.ts';
import { users } from '../db/schema/account.ts';
import { memberships } from '../db/schema/site.ts';
import type { Member, SignedIn } from './platform.ts';

/** The person as a member of the site, or null where there is no such site or the person is not, not yet or no longer on it. */
export async function memberOf(db: Handle, person: SignedIn, siteId: string, now: Date): Promise<Member | null> {
	const rows = await db
		.select({ role: memberships.role, companyId: memberships.companyId, holder: users.name })
		.from(memberships)
		.leftJoin(users, eq(users.id, memberships.deputyFor))
		.where(and(eq(memberships.siteId, siteId), eq(memberships.userId, person.userId), isOnSite(now)))
		.orderBy(asc(memberships.role));
	if (rows.length === 0) return null;
	const companyIds = new Set(rows.flatMap(({ companyId }) => (companyId === null ? [] : [companyId])));
	const asDeputyOf = rows.flatMap(({ role, holder }) => (holder === null ? [] : [{ role, name: holder }]));
	const stead = asDeputyOf.length > 0 ? { asDeputyOf } : {};
	return { ...person, ...stead, siteId, roles: [...new Set(rows.map(({ role }) => role))], companyIds: [...companyIds] };
}

/** Who holds one of these roles on the site at this time, deputies among them; of contractors those of the company where one is given. User ids, each once. */
export async function peopleWith(
	db: Handle,
	{ siteId, roles, companyId, now }: { siteId: string; roles: readonly Role[]; companyId?: string; now: Date },
): Promise<string[]> {
	const ofCompany = companyId === undefined ? undefined : or(ne(memberships.role, 'contractor'), eq(memberships.companyId, companyId));
	const rows = await db
		.selectDistinct({ userId: memberships.userId })
		.from(memberships)
		.where(and(eq(memberships.siteId, siteId), inArray(memberships.role, [...roles]), isOnSite(now), ofCompany));
	return rows.map(({ userId }) => userId);
}

/** Of a membership row: it has begun and has not ended at this time. */
export function isOnSite(now: Date): SQL | undefined {
	return and(lte(memberships.fromAt, now), or(isNull(memberships.leftAt), gt(memberships.leftAt, now)));
}
