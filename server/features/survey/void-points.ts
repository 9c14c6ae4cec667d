import { and, count, eq, gte, isNotNull, isNull, lte } from 'drizzle-orm';
import type { VoidedPoints } from '#shared/survey/contract.ts';
import { lockSite } from '../../db/lock-site.ts';
import { fits } from '../../db/schema/fit.ts';
import { setups, surveyPoints, surveys } from '../../db/schema/survey.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';

/** Rows of one set-up, both ends with them; to the end of the file where no last row is said. */
export interface AskedRows {
	setupId: string;
	fromRow: number;
	toRow: number | null;
	reason: string;
}

/**
 * Voids a set-up's points from one row on: later fits and checks pass over them, with the reason kept on each. Fits and checks made
 * before keep what they were made of; the answer names the adopted fit that stands on the set-up. Points voided already keep their
 * reason. NOT_FOUND for another site's set-up; refused where no point is left to void there.
 */
export function voidPoints(platform: Platform, member: Member, asked: AskedRows): Promise<VoidedPoints> {
	return mark(platform, member, asked, { from: isNull(surveyPoints.voidedReason), to: asked.reason, kind: 'points-voided' });
}

/** Takes voiding back, likewise; refused where no point there is voided. */
export function unvoidPoints(platform: Platform, member: Member, asked: AskedRows): Promise<VoidedPoints> {
	return mark(platform, member, asked, { from: isNotNull(surveyPoints.voidedReason), to: null, kind: 'points-restored' });
}

interface Marking {
	/** What the points must be for it. */
	from: ReturnType<typeof isNull>;
	to: string | null;
	kind: 'points-voided' | 'points-restored';
}

async function mark(
	platform: Platform,
	member: Member,
	{ setupId, fromRow, toRow, reason }: AskedRows,
	{ from, to, kind }: Marking,
): Promise<VoidedPoints> {
	const { siteId } = member;
	return platform.transaction(async (tx) => {
		// Adopting and starting a check wait: neither sees half of it.
		await lockSite(tx, siteId);
		const { setup, survey } = foundOne(
			await tx
				.select({ setup: setups, survey: surveys })
				.from(setups)
				.innerJoin(surveys, eq(surveys.id, setups.surveyId))
				.where(and(eq(setups.siteId, siteId), eq(setups.id, setupId))),
		);
		if (survey.state !== 'ready') throw new Refused('survey-not-ready', 'The points of this survey are not stored whole yet.', 'setupId');
		const changed = await tx
			.update(surveyPoints)
			.set({ voidedReason: to })
			.where(
				and(
					eq(surveyPoints.setupId, setupId),
					gte(surveyPoints.row, fromRow),
					toRow === null ? undefined : lte(surveyPoints.row, toRow),
					from,
				),
			)
			.returning({ row: surveyPoints.row });
		if (changed.length === 0) {
			const what = to === null ? 'is voided' : 'is left to void';
			throw new Refused('no-such-points', `No point of set-up ${setup.name} ${what} from row ${fromRow} on.`, 'fromRow');
		}
		const [adopted] = await tx
			.select({ number: fits.number })
			.from(fits)
			.where(and(eq(fits.setupId, setupId), eq(fits.state, 'adopted')));
		const [left] = await tx
			.select({ count: count() })
			.from(surveyPoints)
			.where(and(eq(surveyPoints.setupId, setupId), isNull(surveyPoints.voidedReason)));
		const adoptedFitNumber = adopted?.number ?? null;
		const data = { surveyNumber: survey.number, setupName: setup.name, fromRow, toRow, points: changed.length, reason, adoptedFitNumber };
		await audit(tx, member, { kind, subjectId: setupId, data });
		return { pointCount: changed.length, leftCount: left?.count ?? 0, adoptedFitNumber };
	});
}
