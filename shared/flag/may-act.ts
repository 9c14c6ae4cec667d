import type { FlagActKind, FlagActor, FlagLife } from './flag-life.ts';

/**
 * Whether this person may do this to this flag at all, by the table of roles; whether it can be done now is the state's.
 * Too close to call is asked of both engineers: to survey again is also the site engineer's to say.
 */
export function mayAct(actor: FlagActor, kind: FlagActKind, flag: Pick<FlagLife, 'companyId'>, decision?: string): boolean {
	if (kind === 'measured-again' || kind === 'lapse') return actor === 'server';
	if (actor === 'server') return false;
	const { roles, companyIds } = actor;
	switch (kind) {
		case 'answer':
		case 'ask-time':
		case 'put-right':
			return roles.includes('contractor') && flag.companyId !== null && companyIds.includes(flag.companyId);
		case 'grant-time':
			return roles.includes('project-engineer');
		case 'decide':
			return roles.includes('project-engineer') || (decision === 'survey-again' && roles.includes('site-engineer'));
		case 'consent':
			return roles.includes('owners-representative');
	}
}

/** Whether a person sees the flag: a contractor those of its own companies, every other role all. */
export function maySeeFlag(actor: Exclude<FlagActor, 'server'>, flag: Pick<FlagLife, 'companyId'>): boolean {
	if (actor.roles.some((role) => role !== 'contractor')) return true;
	return actor.roles.includes('contractor') && flag.companyId !== null && actor.companyIds.includes(flag.companyId);
}

/** Who may comment: the engineers and the owner's representative on all, a contractor on its own. */
export function mayComment(actor: Exclude<FlagActor, 'server'>, flag: Pick<FlagLife, 'companyId'>): boolean {
	const { roles, companyIds } = actor;
	if (roles.some((role) => role === 'site-engineer' || role === 'project-engineer' || role === 'owners-representative')) return true;
	return roles.includes('contractor') && flag.companyId !== null && companyIds.includes(flag.companyId);
}
