import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { Member } from '../../platform/platform.ts';

export function maySeePour(member: Pick<Member, 'roles' | 'companyIds'>, pour: { companyId: string }): boolean {
	return seesEveryPour(member.roles) || member.companyIds.includes(pour.companyId);
}
