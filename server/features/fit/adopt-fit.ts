import { and, asc, eq, max } from 'drizzle-orm';
import type { FitSummary, SurveyorInCharge } from '#shared/fit/contract.ts';
import { lockSite } from '../../db/lock-site.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { setups } from '../../db/schema/survey.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, foundOne, Refused } from '../../platform/refuse.ts';
import { whyNotAdoptable } from './policy.ts';
import { fitOf } from './queries.ts';
import { saidSurveyor } from './said-surveyor.ts';

/**
 * Adopts a made fit: checks carry the set-up's points over by it. The set-up's fit adopted before is superseded. Fits that were made
 * together are adopted together, all or none. Once only: CONFLICT
 * where it is no longer merely made, 'stale' where the control has a newer set since.
 */
export async function adoptFit(
	platform: Platform,
	member: Member,
	{ fitId, reason, surveyorInCharge }: { fitId: string; reason: string; surveyorInCharge?: SurveyorInCharge | undefined },
): Promise<FitSummary | 'stale'> {
	const { siteId } = member;
	try {
		const end = await platform.transaction(async (tx) => {
			await lockSite(tx, siteId);
			const asked = foundOne(
				await tx
					.select()
					.from(fits)
					.where(and(eq(fits.siteId, siteId), eq(fits.id, fitId))),
			);
			// Fits that were made together stand together: one rests on the sightings of the others.
			const together = await tx
				.select({ fit: fits, setup: setups, controlNumber: controlSets.number })
				.from(fits)
				.innerJoin(setups, eq(setups.id, fits.setupId))
				.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
				.where(and(eq(fits.siteId, siteId), asked.networkId === null ? eq(fits.id, fitId) : eq(fits.networkId, asked.networkId)))
				.orderBy(asc(fits.number));
			const [newest] = await tx
				.select({ number: max(controlSets.number) })
				.from(controlSets)
				.where(eq(controlSets.siteId, siteId));
			for (const { fit, setup, controlNumber } of together) {
				if ((newest?.number ?? 0) > controlNumber) return 'stale';
				const fault = whyNotAdoptable(fit.kind, setup);
				if (fault !== null) throw new Refused('wrong-kind', fault, 'fitId');
			}
			for (const { fit } of together) {
				const superseded = await tx
					.update(fits)
					.set({ state: 'superseded' })
					.where(and(eq(fits.setupId, fit.setupId), eq(fits.state, 'adopted')))
					.returning({ number: fits.number });
				const adopted = await tx
					.update(fits)
					.set({
						state: 'adopted',
						adoptedBy: member.userId,
						adoptedAt: platform.now(),
						adoptedReason: reason,
						...saidSurveyor(surveyorInCharge),
					})
					.where(and(eq(fits.siteId, siteId), eq(fits.id, fit.id), eq(fits.state, 'made')))
					.returning({ id: fits.id });
				if (adopted.length === 0) throw new Conflict(`Fit ${fit.number} was adopted already. Look again, then decide.`);
				const data = {
					number: fit.number,
					setupId: fit.setupId,
					reason,
					supersedes: superseded.map(({ number }) => number),
					...(fit.networkId === null ? {} : { networkId: fit.networkId }),
				};
				await audit(tx, member, { kind: 'fit-adopted', subjectId: fit.id, data });
			}
			return 'adopted';
		});
		return end === 'stale' ? end : fitOf(platform.db, siteId, fitId);
	} catch (error) {
		if (isUniqueViolation(error, 'fits_one_adopted'))
			throw new Conflict('Another fit of this set-up was adopted a moment ago. Look again.');
		throw error;
	}
}
