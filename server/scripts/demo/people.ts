import type { Role } from '#shared/permissions.ts';
import { users } from '../../db/schema/account.ts';
import { buildings, companies, memberships, sites } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import { hashPassword } from '../../platform/password.ts';
import type { Member, Platform } from '../../platform/platform.ts';

/** Who is on the invented site. */

const siteName = 'Marrowby pump house';
export const demoPassword = 'plumb-and-level';

const people = [
	{ role: 'site-engineer', name: 'Jo Marsh', email: 'site@marrowby.example', company: null },
	{ role: 'project-engineer', name: 'Ida Roen', email: 'project@marrowby.example', company: null },
	{ role: 'contractor', name: 'Lena Fennick', email: 'contractor@marrowby.example', company: 'Fennick Forms' },
	{ role: 'owners-representative', name: 'R. Amadi', email: 'owner@marrowby.example', company: null },
	{ role: 'observer', name: 'N. Vale', email: 'observer@marrowby.example', company: null },
	// The second person: a fit is checked by another than who adopted it.
	{ role: 'site-engineer', name: 'T. Okoro', email: 'second@marrowby.example', company: null },
] as const satisfies readonly { role: Role; name: string; email: string; company: string | null }[];
const companyNames = ['Fennick Forms', 'Oster Steel'] as const;

export interface DemoPeople {
	siteId: string;
	siteEngineer: Member;
	secondEngineer: Member;
	projectEngineer: Member;
	contractor: Member;
	ownersRepresentative: Member;
	companyIds: ReadonlyMap<(typeof companyNames)[number], string>;
}

/** Who can sign in to the demo, and with what. */
export function demoSentence(): string {
	const lines = people.map(({ role, email }) => `  ${email.padEnd(30)}${role.replace(/-/g, ' ').replace('owners', 'owner’s')}`);
	return [`The demo site is invented, and so are all people on it. Password of each: ${demoPassword}`, ...lines].join('\n');
}

/** The site, founded at this time, with its companies and one person a role, and a second site engineer. */
export async function addPeople({ newId, transaction }: Platform, at: Date): Promise<DemoPeople> {
	const siteId = newId();
	const passwordHash = await hashPassword(demoPassword);
	const companyIds = new Map(companyNames.map((name) => [name, newId()]));
	const members = people.map(({ role, name, email, company }): Member => {
		const companyId = company === null ? undefined : companyIds.get(company);
		return { userId: newId(), name, email, siteId, roles: [role], companyIds: companyId === undefined ? [] : [companyId] };
	});
	const [siteEngineer, projectEngineer, contractor, ownersRepresentative, , secondEngineer] = members as [
		Member,
		Member,
		Member,
		Member,
		Member,
		Member,
	];
	await transaction(async (tx) => {
		await tx.insert(sites).values({
			id: siteId,
			name: siteName,
			timeZone: 'Europe/London',
			isInvented: true,
			isFitCheckedBySecond: true,
			columnOrder: null,
			createdAt: at,
		});
		await tx.insert(buildings).values({ id: newId(), siteId, name: 'Pump house' });
		await tx.insert(companies).values([...companyIds].map(([name, id]) => ({ id, siteId, name })));
		for (const { userId, name, email, roles, companyIds: own } of members) {
			await tx.insert(users).values({ id: userId, email, name, passwordHash, createdAt: at });
			for (const role of roles) {
				// The one of each company leads its people.
				const isLead = role === 'contractor';
				await tx.insert(memberships).values({ id: newId(), siteId, userId, role, companyId: own[0] ?? null, isLead, fromAt: at });
			}
		}
		await audit(tx, projectEngineer, { kind: 'site-founded', subjectId: siteId, data: { name: siteName, isInvented: true } });
		for (const { userId, roles } of members) await audit(tx, projectEngineer, { kind: 'member-added', subjectId: userId, data: { roles } });
	});
	return { siteId, siteEngineer, secondEngineer, projectEngineer, contractor, ownersRepresentative, companyIds };
}
