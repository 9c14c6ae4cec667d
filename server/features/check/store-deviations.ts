import type { Deviation } from '#shared/check/check-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { vectorOf } from '../../db/model-rows.ts';
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

/** A stored deviation as it was computed; what the design says of its checkpoint comes beside. */
export function deviationOf(
	row: DeviationRow,
	checkpoint: Pick<Deviation, 'elementId' | 'characteristic' | 'place' | 'direction' | 'label'>,
): Deviation {
	return {
		checkpointId: row.checkpointId,
		elementId: checkpoint.elementId,
		characteristic: checkpoint.characteristic,
		place: checkpoint.place,
		direction: checkpoint.direction,
		label: checkpoint.label,
		measured: row.measuredM === null ? null : vectorOf(row.measuredM),
		notMeasuredReason: row.notMeasuredReason,
		pointName: row.pointName,
		setupId: row.setupId,
		pointCount: row.pointCount,
		deviationMm: row.deviationMm,
		offsetMm: row.offsetMm === null ? null : [required(row.offsetMm, 0), required(row.offsetMm, 1)],
		covarianceMm2: covarianceOf(row.covarianceMm2),
		standardUncertaintyPartsMm: row.uncertaintyParts,
		expandedUncertaintyMm: row.expandedUncertaintyMm,
		limitsMm: row.hasLimits ? [row.lowerMm, row.upperMm] : null,
		...(row.boxYawRad === null ? {} : { boxYawRad: row.boxYawRad }),
		...(row.spreadMm === null ? {} : { spreadMm: row.spreadMm }),
		ruleId: row.ruleId,
		verdict: row.verdict,
		beyondMm: row.beyondMm,
		conformity: row.conformity,
	};
}

/** ee, en, nn: a covariance is symmetric. */
function covarianceRow(covariance: Deviation['covarianceMm2']): number[] | null {
	return covariance === null ? null : [covariance[0][0], covariance[0][1], covariance[1][1]];
}

function covarianceOf(row: number[] | null): Deviation['covarianceMm2'] {
	if (row === null) return null;
	const [ee, en, nn] = vectorOf(row);
	return [
		[ee, en],
		[en, nn],
	];
}

function required(numbers: readonly number[], index: number): number {
	const number = numbers[index];
	if (number === undefined) throw new Error('A stored list is shorter than it was.');
	return number;
}
