import { and, asc, eq, gt, isNull, lte, or } from 'drizzle-orm';
import type { Handle } from '../db/database.ts';
import { memberships } from '../db/schema/site.ts';
import type { Member, SignedIn } from './platform.ts';

/** The person as a member of the site, or null where there is no such site or the person is not, not yet or no longer on it. */
export async function memberOf(db: Handle, person: SignedIn, siteId: string, now: Date): Promise<Member | null> {
	const rows = await db
		.select({ role: memberships.role, companyId: memberships.companyId })
		.from(memberships)
		.where(
			and(
				eq(memberships.siteId, siteId),
				eq(memberships.userId, person.userId),
				lte(memberships.fromAt, now),
				or(isNull(memberships.leftAt), gt(memberships.leftAt, now)),
			),
		)
		.orderBy(asc(memberships.role));
	if (rows.length === 0) return null;
	const companyIds = new Set(rows.flatMap(({ companyId }) => (companyId === null ? [] : [companyId])));
	return { ...person, siteId, roles: [...new Set(rows.map(({ role }) => role))], companyIds: [...companyIds] };
}
