import { and, asc, eq, gt, isNull, lte, or } from 'drizzle-orm';
import type { z } from 'zod';
import { roles } from '#shared/permissions.ts';
import type { siteDetail, siteSummary } from '#shared/site/contract.ts';
import type { Handle } from '../../db/database.ts';
import { buildings, companies, memberships, sites } from '../../db/schema/site.ts';
import type { Member, SignedIn } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';
import { lineOf } from './line.ts';
import { readLineFacts } from './read-line-facts.ts';

type SiteSummary = z.infer<typeof siteSummary>;
type SiteDetail = z.infer<typeof siteDetail>;

/** The sites the person is on today, by name, each once with all roles held there. */
export async function sitesOf(db: Handle, person: SignedIn, now: Date): Promise<SiteSummary[]> {
	const rows = await db
		.select({ siteId: sites.id, name: sites.name, isInvented: sites.isInvented, role: memberships.role })
		.from(memberships)
		.innerJoin(sites, eq(sites.id, memberships.siteId))
		.where(
			and(eq(memberships.userId, person.userId), lte(memberships.fromAt, now), or(isNull(memberships.leftAt), gt(memberships.leftAt, now))),
		)
		.orderBy(asc(sites.name), asc(sites.id));
	const bySite = new Map(rows.map((row) => [row.siteId, row]));
	return [...bySite.values()].map(({ siteId, name, isInvented }) => {
		const held = rows.flatMap((row) => (row.siteId === siteId ? [row.role] : []));
		return { siteId, name, isInvented, roles: roles.filter((role) => held.includes(role)) };
	});
}

/** The member's site with its line. */
export async function siteDetailOf(db: Handle, member: Member, now: Date): Promise<SiteDetail> {
	const { siteId } = member;
	const site = foundOne(await db.select().from(sites).where(eq(sites.id, siteId)));
	return {
		siteId,
		name: site.name,
		isInvented: site.isInvented,
		roles: [...member.roles],
		timeZone: site.timeZone,
		columnOrder: site.columnOrder,
		buildings: await db
			.select({ buildingId: buildings.id, name: buildings.name })
			.from(buildings)
			.where(eq(buildings.siteId, siteId))
			.orderBy(asc(buildings.name)),
		companies: await db
			.select({ companyId: companies.id, name: companies.name })
			.from(companies)
			.where(eq(companies.siteId, siteId))
			.orderBy(asc(companies.name)),
		line: lineOf(await readLineFacts(db, member), now, site.timeZone),
	};
}
