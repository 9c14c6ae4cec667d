import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { Member } from '../../platform/platform.ts';

/** The companies to whose pours a member's sight of a check is narrowed; null where the member sees all of it. */
export function narrowedTo(member: Pick<Member, 'roles' | 'companyIds'>): readonly string[] | null {
	return seesEveryPour(member.roles) ? null : member.companyIds;
}
