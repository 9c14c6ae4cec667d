import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { Member } from '../../platform/platform.ts';

/** A contractor sees the pours of its own companies, and those in which an element is theirs (bolts: steel). */
export function maySeePour(
	member: Pick<Member, 'roles' | 'companyIds'>,
	pour: { companyId: string },
	elementCompanyIds: readonly string[] = [],
): boolean {
	return seesEveryPour(member.roles) || [pour.companyId, ...elementCompanyIds].some((companyId) => member.companyIds.includes(companyId));
}
