/** Who may do what: the table of roles as data. The server's guard and the client's hiding read the same. */

export const roles = ['site-engineer', 'project-engineer', 'contractor', 'owners-representative', 'observer'] as const;
export type Role = (typeof roles)[number];

const everybody: readonly Role[] = roles;

/** `public`: without a session. `signed-in`: any person with a session. All others: a role on the site of the request. */
export const permissions = {
	'site.see': everybody,
	'site.write': ['project-engineer'],
	/** Whom one may name is the policy's: nobody but owner's representatives names those, a contractor's lead only its own people. */
	'member.write': ['project-engineer', 'contractor', 'owners-representative'],
	'company.write': ['project-engineer'],
	'deputy.name': ['site-engineer', 'project-engineer', 'contractor', 'owners-representative'],
	'audit.see': ['site-engineer', 'project-engineer', 'owners-representative', 'observer'],
	'model.see': everybody,
	'model.write': ['project-engineer'],
	'checkpoint.write': ['site-engineer'],
	'mark.write': ['site-engineer', 'project-engineer'],
	'control.see': everybody,
	'control.write': ['site-engineer'],
	'survey.see': everybody,
	'survey.write': ['site-engineer'],
	'fit.see': everybody,
	'fit.write': ['site-engineer'],
	'fit.adopt': ['site-engineer'],
	'tolerance.see': everybody,
	'tolerance.write': ['project-engineer'],
	'check.see': everybody,
	'check.write': ['site-engineer'],
	'check.publish': ['site-engineer'],
	'flag.see': everybody,
	'flag.answer': ['contractor'],
	/** A site engineer only that it is to be surveyed again: the policy's. */
	'flag.decide': ['site-engineer', 'project-engineer'],
	'flag.grant': ['project-engineer'],
	'flag.consent': ['owners-representative'],
	'flag.comment': ['site-engineer', 'project-engineer', 'contractor', 'owners-representative'],
	'pour.see': everybody,
	'pour.write': ['project-engineer'],
	/** Call a hold point, concreting from–to, notice of a witness point: whose pour it is, the policy says. */
	'pour.call': ['contractor'],
	'pour.submit': ['project-engineer'],
	'pour.release': ['owners-representative'],
	/** Say whether one came to a witness point. */
	'pour.witness': ['site-engineer', 'project-engineer', 'owners-representative'],
	'pour.meet': ['project-engineer', 'contractor'],
	'record.see': everybody,
	'record.chain': ['site-engineer', 'project-engineer', 'owners-representative', 'observer'],
	'job.see': ['site-engineer', 'project-engineer', 'owners-representative', 'observer'],
	'job.cancel': ['site-engineer', 'project-engineer'],
} as const satisfies Record<string, readonly Role[]>;

export type SitePermission = keyof typeof permissions;
export type Permission = SitePermission | 'public' | 'signed-in';

/** True where one of a member's roles on a site carries the permission. */
export function mayWith(memberRoles: readonly Role[], permission: SitePermission): boolean {
	const allowed: readonly Role[] = permissions[permission];
	return memberRoles.some((role) => allowed.includes(role));
}
