import { and, eq, isNull, ne } from 'drizzle-orm';
import type { FitSummary, SurveyorInCharge } from '#shared/fit/contract.ts';
import { fits } from '../../db/schema/fit.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, foundOne, Refused } from '../../platform/refuse.ts';
import { whyNotCheckable } from './policy.ts';
import { fitOf } from './queries.ts';
import { saidSurveyor } from './said-surveyor.ts';

/**
 * A second person has checked the adopted fit. Refused for whoever adopted it, and where it is not adopted or no longer; CONFLICT where
 * it is checked already.
 */
export async function confirmFit(
	platform: Platform,
	member: Member,
	{ fitId, note, surveyorInCharge }: { fitId: string; note: string; surveyorInCharge?: SurveyorInCharge | undefined },
): Promise<FitSummary> {
	const { siteId, userId } = member;
	await platform.transaction(async (tx) => {
		const fit = foundOne(
			await tx
				.select()
				.from(fits)
				.where(and(eq(fits.siteId, siteId), eq(fits.id, fitId))),
		);
		const fault = whyNotCheckable(fit, userId);
		if (fault !== null) throw new Refused(fault.code, fault.message, 'fitId');
		const checked = await tx
			.update(fits)
			.set({ checkedBy: userId, checkedAt: platform.now(), checkedNote: note, ...saidSurveyor(surveyorInCharge) })
			.where(
				and(
					eq(fits.siteId, siteId),
					// Fits that were made together are checked together, as many of them as are still adopted.
					fit.networkId === null ? eq(fits.id, fitId) : eq(fits.networkId, fit.networkId),
					eq(fits.state, 'adopted'),
					isNull(fits.checkedBy),
					ne(fits.adoptedBy, userId),
				),
			)
			.returning({ id: fits.id, number: fits.number, setupId: fits.setupId });
		if (!checked.some(({ id }) => id === fitId)) throw new Conflict(`Fit ${fit.number} is checked already. Look again.`);
		for (const { id, number, setupId } of checked)
			await audit(tx, member, { kind: 'fit-checked', subjectId: id, data: { number, setupId, note } });
	});
	return fitOf(platform.db, siteId, fitId);
}
