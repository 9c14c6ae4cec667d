import type { Deviation } from '#shared/check/check-schema.ts';
import { vectorOf } from './model-rows.ts';
import type { deviations } from './schema/check.ts';

type DeviationRow = typeof deviations.$inferSelect;

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
