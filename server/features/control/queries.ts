import { and, asc, desc, eq, type SQL, sql } from 'drizzle-orm';
import type { ControlPoint, ControlSetSummary } from '#shared/control/contract.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { controlPoints, controlSets } from '../../db/schema/control.ts';
import { foundOne } from '../../platform/refuse.ts';

function setRows(db: Handle, where: SQL | undefined): Promise<ControlSetSummary[]> {
	return db
		.select({
			controlSetId: controlSets.id,
			number: controlSets.number,
			name: controlSets.name,
			frame: controlSets.frame,
			fileName: controlSets.fileName,
			fileSha256: controlSets.fileSha256,
			pointCount: sql<number>`(select count(*)::int from ${controlPoints} where ${controlPoints.controlSetId} = ${controlSets.id})`,
			storedBy: users.name,
			storedAt: controlSets.storedAt,
		})
		.from(controlSets)
		.innerJoin(users, eq(users.id, controlSets.storedBy))
		.where(where)
		.orderBy(desc(controlSets.number));
}

/** The site's control sets, newest first. */
export function controlSetsOf(db: Handle, siteId: string): Promise<ControlSetSummary[]> {
	return setRows(db, eq(controlSets.siteId, siteId));
}

/** One set of the site; NOT_FOUND for another site's. */
export async function controlSetOf(db: Handle, siteId: string, controlSetId: string): Promise<ControlSetSummary> {
	return foundOne(await setRows(db, and(eq(controlSets.siteId, siteId), eq(controlSets.id, controlSetId))));
}

/** A set with its points, by name. */
export async function controlSetWithPoints(
	db: Handle,
	siteId: string,
	controlSetId: string,
): Promise<ControlSetSummary & { points: ControlPoint[] }> {
	const set = await controlSetOf(db, siteId, controlSetId);
	const rows = await db.select().from(controlPoints).where(eq(controlPoints.controlSetId, controlSetId)).orderBy(asc(controlPoints.name));
	return {
		...set,
		points: rows.map((row) => ({
			controlPointId: row.id,
			name: row.name,
			givenM: [row.givenXM, row.givenYM, row.givenZM],
			designM: [row.designXM, row.designYM, row.designZM],
			sigmaPlanM: row.sigmaPlanM,
			sigmaHeightM: row.sigmaHeightM,
			code: row.code,
		})),
	};
}
