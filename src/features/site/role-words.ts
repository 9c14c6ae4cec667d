import type { Role } from '#shared/permissions.ts';

const words: Record<Role, string> = {
	'site-engineer': 'Site engineer',
	'project-engineer': 'Project engineer',
	contractor: 'Contractor',
	'owners-representative': 'Owner’s representative',
	observer: 'Observer',
};

/** The roles of a person on a site as one line: "Site engineer, project engineer". */
export function roleWords(roles: readonly Role[]): string {
	return roles.map((role, index) => (index === 0 ? words[role] : words[role].charAt(0).toLowerCase() + words[role].slice(1))).join(', ');
}
