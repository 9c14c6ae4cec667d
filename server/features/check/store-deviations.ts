import type { Deviation } from '#shared/check/check-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { type checks, deviations } from '../../db/schema/check.ts';
import { storableText } from '../../db/storable-text.ts';

type DeviationRow = typeof deviations.$inferSelect;

/** Stores a check's deviations in the order given. */
export async function storeDeviations(tx: Transaction, check: typeof checks.$inferSelect, computed: readonly Deviation[]): Promise<void> {
	await insertRows(
		tx,
		deviations,
		computed.map(
			(deviation, position): DeviationRow => ({
				checkId: check.id,
				position,
				revisionId: check.revisionId,
				checkpointId: deviation.checkpointId,
				setupId: deviation.setupId,
				pointName: deviation.pointName,
				pointCount: deviation.pointCount,
				measuredM: deviation.measured,
				notMeasuredReason: deviation.notMeasuredReason === null ? null : storableText(deviation.notMeasuredReason),
				deviationMm: deviation.deviationMm,
				offsetMm: deviation.offsetMm,
				covarianceMm2: covarianceRow(deviation.covarianceMm2),
				uncertaintyParts: deviation.standardUncertaintyPartsMm,
				expandedUncertaintyMm: deviation.expandedUncertaintyMm,
				hasLimits: deviation.limitsMm !== null,
				lowerMm: deviation.limitsMm?.[0] ?? null,
				upperMm: deviation.limitsMm?.[1] ?? null,
				boxYawRad: deviation.boxYawRad ?? null,
				spreadMm: deviation.spreadMm ?? null,
				ruleId: deviation.ruleId,
				verdict: deviation.verdict,
				beyondMm: deviation.beyondMm,
				conformity: deviation.conformity,
			}),
		),
	);
}

/** ee, en, nn: a covariance is symmetric. */
function covarianceRow(covariance: Deviation['covarianceMm2']): number[] | null {
	return covariance === null ? null : [covariance[0][0], covariance[0][1], covariance[1][1]];
}
