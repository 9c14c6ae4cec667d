import type { Role } from '../permissions.ts';

/** True where one of the roles sees all of a site. Who is only a contractor sees the pours of its own companies, and what belongs to them. */
export function seesEveryPour(memberRoles: readonly Role[]): boolean {
	return memberRoles.some((role) => role !== 'contractor');
}
