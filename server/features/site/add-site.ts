import type { Role } from '#shared/permissions.ts';
import type { Transaction } from '../../db/database.ts';
import { buildings, companies, memberships, sites } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform, SignedIn } from '../../platform/platform.ts';

/** Who founds a site prepares its surveys and its model; an owner's representative is named by the owner's side. */
const foundersRoles: readonly Role[] = ['site-engineer', 'project-engineer'];

/** A new site with a first building and a first company, the founder on it; answers the founder as its member. */
export async function addSite(
	tx: Transaction,
	{ newId, now }: Pick<Platform, 'newId' | 'now'>,
	founder: SignedIn,
	{ name, timeZone }: { name: string; timeZone: string },
): Promise<Member> {
	const siteId = newId();
	const createdAt = now();
	await tx
		.insert(sites)
		.values({ id: siteId, name, timeZone, isInvented: false, isFitCheckedBySecond: true, columnOrder: null, createdAt });
	await tx.insert(buildings).values({ id: newId(), siteId, name: 'Building 1' });
	await tx.insert(companies).values({ id: newId(), siteId, name: 'Contractor 1' });
	await tx
		.insert(memberships)
		.values(foundersRoles.map((role) => ({ id: newId(), siteId, userId: founder.userId, role, companyId: null, fromAt: createdAt })));
	const member: Member = { ...founder, siteId, roles: foundersRoles, companyIds: [] };
	await audit(tx, member, { kind: 'site-founded', subjectId: siteId, data: { name, timeZone } });
	return member;
}
