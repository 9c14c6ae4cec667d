import { and, eq, isNull } from 'drizzle-orm';
import type { HoldPointKind, PourLife } from '#shared/pour/pour-life.ts';
import type { Handle } from '../../db/database.ts';
import { holdPoints, pourElements, pourHolds, pours } from '../../db/schema/pour.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne, NotFound } from '../../platform/refuse.ts';
import { maySeePour } from './policy.ts';

export interface LoadedLife {
	pour: typeof pours.$inferSelect;
	points: Record<HoldPointKind, typeof holdPoints.$inferSelect>;
	hold: typeof pourHolds.$inferSelect | null;
	life: PourLife;
}

/** A pour of the site as its life sees it; NOT_FOUND for another site's. */
export async function loadLife(db: Handle, siteId: string, pourId: string): Promise<LoadedLife> {
	const pour = foundOne(
		await db
			.select()
			.from(pours)
			.where(and(eq(pours.siteId, siteId), eq(pours.id, pourId))),
	);
	const rows = await db.select().from(holdPoints).where(eq(holdPoints.pourId, pourId));
	const pointOf = (kind: HoldPointKind) => foundOne(rows.filter((row) => row.kind === kind));
	const points = { 'before-pour': pointOf('before-pour'), 'after-pour': pointOf('after-pour') };
	const [hold = null] = await db
		.select()
		.from(pourHolds)
		.where(and(eq(pourHolds.pourId, pourId), isNull(pourHolds.endedAt)));
	const life: PourLife = {
		state: pour.state,
		companyId: pour.companyId,
		points: { 'before-pour': points['before-pour'].state, 'after-pour': points['after-pour'].state },
		isHeld: hold !== null,
	};
	return { pour, points, hold, life };
}

/** The same for a member; NOT_FOUND too where it is not theirs to see. */
export async function loadOwnLife(db: Handle, member: Member, pourId: string): Promise<LoadedLife> {
	const loaded = await loadLife(db, member.siteId, pourId);
	const rows = await db.select({ companyId: pourElements.companyId }).from(pourElements).where(eq(pourElements.pourId, pourId));
	if (
		!maySeePour(
			member,
			loaded.pour,
			rows.flatMap(({ companyId }) => companyId ?? []),
		)
	)
		throw new NotFound();
	return loaded;
}
