import { and, eq, inArray, isNull } from 'drizzle-orm';
import { whatTouches } from '#shared/pour/what-touches.ts';
import { decisionBody, type ShownPour } from '#shared/record/sealed-record.ts';
import type { Handle } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { holdPoints, pourHolds, pours } from '../../db/schema/pour.ts';
import { sealedRecords } from '../../db/schema/record.ts';
import { audit } from '../../platform/audit.ts';
import { peopleWith } from '../../platform/membership.ts';
import { postNotices } from '../../platform/notices.ts';
import type { Platform } from '../../platform/platform.ts';
import { loadShown } from './load-shown.ts';
import { endedInputs } from './pour-inputs.ts';

/** What touches a signed hold point since, in sentences; none where it stands or nothing of it is signed as released. */
export async function touchesOf(
	db: Handle,
	siteId: string,
	{ recordId, present }: { recordId: string | null; present: ShownPour },
): Promise<string[]> {
	if (recordId === null) return [];
	const [record] = await db
		.select({ text: sealedRecords.text, act: sealedRecords.act })
		.from(sealedRecords)
		.where(eq(sealedRecords.id, recordId));
	if (record === undefined || (record.act !== 'released' && record.act !== 'released-with-conditions')) return [];
	const { shown } = decisionBody.parse(JSON.parse(record.text).body);
	return whatTouches(shown, present, await endedInputs(db, siteId, shown));
}

/**
 * Looks at every pour that is released and not cast yet, and holds those that something touches: "Hold: do not pour" to all concerned.
 * Called before whatever reads or begins a pour, and by the clock, so that a hold does not wait for anybody to look.
 */
export async function holdTouched(platform: Platform, siteId?: string): Promise<void> {
	const released = await platform.db
		.select({ pourId: pours.id, siteId: pours.siteId })
		.from(pours)
		.innerJoin(holdPoints, and(eq(holdPoints.pourId, pours.id), eq(holdPoints.kind, 'before-pour')))
		.where(
			and(
				inArray(pours.state, ['planned', 'concreting']),
				inArray(holdPoints.state, ['released', 'released-with-conditions']),
				siteId === undefined ? undefined : eq(pours.siteId, siteId),
			),
		);
	for (const one of released) await holdIfTouched(platform, one);
}

async function holdIfTouched(platform: Platform, { pourId, siteId }: { pourId: string; siteId: string }): Promise<void> {
	await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const [row] = await tx
			.select({ pour: pours, point: holdPoints })
			.from(pours)
			.innerJoin(holdPoints, and(eq(holdPoints.pourId, pours.id), eq(holdPoints.kind, 'before-pour')))
			.where(eq(pours.id, pourId));
		const held = await tx
			.select({ id: pourHolds.id })
			.from(pourHolds)
			.where(and(eq(pourHolds.pourId, pourId), isNull(pourHolds.endedAt)));
		if (row === undefined || held.length > 0 || row.pour.state === 'cast' || row.pour.state === 'cast-in-part') return;
		const { shown } = await loadShown(tx, siteId, pourId, 'before-pour');
		const reasons = await touchesOf(tx, siteId, { recordId: row.point.recordId, present: shown });
		if (reasons.length === 0) return;
		const now = platform.now();
		await tx.insert(pourHolds).values({ id: platform.newId(), siteId, pourId, reasons, raisedAt: now, raisedBy: null });
		await audit(
			tx,
			{ userId: null, address: null },
			{ kind: 'pour-held', subjectId: pourId, data: { number: row.pour.number, reasons } },
			siteId,
		);
		const userIds = await peopleWith(tx, {
			siteId,
			roles: ['site-engineer', 'project-engineer', 'contractor', 'owners-representative'],
			companyId: row.pour.companyId,
			now,
		});
		await postNotices(tx, { siteId, actId: platform.newId(), actorId: null, now }, [
			{
				kind: 'hold',
				userIds,
				subjectId: pourId,
				sentence: `Hold: do not pour ${row.pour.number}, ${row.pour.name}. ${reasons.join(' ')}`,
				path: `/sites/${siteId}/pours/${pourId}`,
			},
		]);
	});
}
