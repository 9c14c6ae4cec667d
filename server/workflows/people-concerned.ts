import { and, asc, eq } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import type { Handle } from '../db/database.ts';
import { users } from '../db/schema/account.ts';
import { memberships } from '../db/schema/site.ts';
import { isOnSite } from '../platform/membership.ts';

/** A person who is told, once, whatever roles they hold. */
export interface PersonConcerned {
	userId: string;
	companyIds: string[];
	roles: Role[];
}

async function peopleNow(db: Handle, siteId: string, now: Date): Promise<PersonConcerned[]> {
	const rows = await db
		.select({ userId: users.id, role: memberships.role, companyId: memberships.companyId })
		.from(memberships)
		.innerJoin(users, eq(users.id, memberships.userId))
		.where(and(eq(memberships.siteId, siteId), isOnSite(now)))
		.orderBy(asc(users.name), asc(users.id));
	const people = new Map<string, PersonConcerned>();
	for (const { userId, role, companyId } of rows) {
		const person = people.get(userId) ?? { userId, companyIds: [], roles: [] };
		person.roles.push(role);
		if (role === 'contractor' && companyId !== null) person.companyIds.push(companyId);
		people.set(userId, person);
	}
	return [...people.values()];
}

/** The contractors' people of these companies, each once. */
export async function peopleOfCompanies(db: Handle, siteId: string, companyIds: readonly string[], now: Date): Promise<PersonConcerned[]> {
	const people = await peopleNow(db, siteId, now);
	return people.filter((person) => person.companyIds.some((companyId) => companyIds.includes(companyId)));
}

/** Those and whoever has one of the roles, each once. */
export async function peopleOfCompaniesOrRoles(
	db: Handle,
	siteId: string,
	companyIds: readonly string[],
	roles: readonly Role[],
	now: Date,
): Promise<PersonConcerned[]> {
	const people = await peopleNow(db, siteId, now);
	return people.filter(
		(person) => person.companyIds.some((companyId) => companyIds.includes(companyId)) || person.roles.some((role) => roles.includes(role)),
	);
}
