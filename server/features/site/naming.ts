import type { Role } from '#shared/permissions.ts';

/** What of a member's own rows decides whom they may name. */
export interface Held {
	role: Role;
	companyId: string | null;
	isLead: boolean;
	/** Holds the role in somebody's stead. */
	isDeputy: boolean;
}

/** A role to be given or ended. */
export interface Named {
	role: Role;
	companyId: string | null;
}

/**
 * Who may name whom. The project engineer names everybody but owner's representatives; a contractor's lead its own company's people;
 * owner's representatives name each other, never through a deputy. Until a site has had one, the project engineer names the owner's
 * contact, as at founding: else a site founded without it could never release a pour.
 */
export function mayName(held: readonly Held[], named: Named, hasHadOwnersRepresentative: boolean): boolean {
	const own = held.filter(({ isDeputy }) => !isDeputy);
	if (named.role === 'owners-representative') {
		if (own.some(({ role }) => role === 'owners-representative')) return true;
		return !hasHadOwnersRepresentative && own.some(({ role }) => role === 'project-engineer');
	}
	if (held.some(({ role }) => role === 'project-engineer')) return true;
	return (
		named.role === 'contractor' &&
		own.some(({ role, isLead, companyId }) => role === 'contractor' && isLead && companyId === named.companyId)
	);
}

/** Who releases does nothing else on the site: no two of the roles may stand on both sides. */
export function areSeparate(roles: readonly Role[]): boolean {
	return !roles.includes('owners-representative') || roles.every((role) => role === 'owners-representative');
}
