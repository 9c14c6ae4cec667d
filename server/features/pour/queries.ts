import { and, asc, eq, sql } from 'drizzle-orm';
import type { PourSummary } from '#shared/pour/contract.ts';
import type { Handle } from '../../db/database.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import { companies } from '../../db/schema/site.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';
import { maySeePour } from './policy.ts';

const columns = {
	pourId: pours.id,
	number: pours.number,
	name: pours.name,
	companyId: pours.companyId,
	companyName: companies.name,
	plannedAt: pours.plannedAt,
	elementCount: sql<number>`(select count(*)::int from ${pourElements} where ${pourElements.pourId} = ${pours.id})`,
};

/** The pours this member may see, by planned hour; those without one last, then by number. */
export async function poursOf(db: Handle, member: Member): Promise<PourSummary[]> {
	const rows = await db
		.select(columns)
		.from(pours)
		.innerJoin(companies, eq(companies.id, pours.companyId))
		.where(eq(pours.siteId, member.siteId))
		.orderBy(sql`${pours.plannedAt} asc nulls last`, asc(pours.number));
	return rows.filter((pour) => maySeePour(member, pour));
}

export async function pourOf(db: Handle, member: Member, pourId: string): Promise<PourSummary> {
	return foundOne(
		await db
			.select(columns)
			.from(pours)
			.innerJoin(companies, eq(companies.id, pours.companyId))
			.where(and(eq(pours.siteId, member.siteId), eq(pours.id, pourId))),
	);
}
