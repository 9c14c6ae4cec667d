import { coverageFactor } from '../../fit/carry-point.ts';
import type { Vector3 } from '../../geometry/frame.ts';
import type { CheckInputSetup } from '../check-input.ts';
import type { CheckedCheckpoint } from '../checked-checkpoint.ts';
import { covarianceOfSums, type WeightedPlace } from '../fit-covariance-field.ts';
import type { MeasuredDeviation } from '../measure-deviation.ts';
import type { Observation, PreparedSetup } from '../observation.ts';

/** A checkpoint that was measured. */
export interface MeasuredCheckpoint extends CheckedCheckpoint {
	readonly observation: Observation;
	readonly measured: MeasuredDeviation;
}

/** One measured place's share in a derived figure: weightᵀ·(measured place); design frame. */
export interface DerivedTerm {
	readonly entry: MeasuredCheckpoint;
	readonly weight: Vector3;
}

/** What is computed before the sheet is asked. Millimetres. */
export interface DerivedFigure {
	readonly elementId: string;
	readonly label: string;
	readonly deviationMm: number;
	readonly terms: readonly DerivedTerm[];
	/** The checkpoints it is made from, more than have a share where a greatest value was chosen. */
	readonly from: readonly string[];
}

/**
 * U of Σ wᵢᵀ·yᵢ, millimetres: the fit's covariance of the very sum (J_p·Q·J_qᵀ between the places, not as if independent), each point's own part once
 * for each observation, and the common part as one shift a set-up, which cancels where the weights of a set-up add up to nothing.
 * Set-ups count as independent of each other, but for those adjusted together, whose fits share what tied them. Null where a part is not known. GUM (JCGM 100) 5.2.
 */
export function linearUncertaintyMm(terms: readonly DerivedTerm[]): number | null {
	const bySetup = new Map<PreparedSetup, Map<Observation, [number, number, number]>>();
	for (const { entry, weight } of terms) {
		const observations = bySetup.get(entry.observation.setup) ?? new Map<Observation, [number, number, number]>();
		const sum = observations.get(entry.observation) ?? [0, 0, 0];
		observations.set(entry.observation, [sum[0] + weight[0], sum[1] + weight[1], sum[2] + weight[2]]);
		bySetup.set(entry.observation.setup, observations);
	}
	let variance = 0;
	let factor = 0;
	const summed: { setup: CheckInputSetup; places: WeightedPlace[] }[] = [];
	for (const [{ setup, field }, observations] of bySetup) {
		const k = coverageFactor(setup.fit);
		if (!field.isKnown || k === null) return null;
		factor = Math.max(factor, k);
		const places: WeightedPlace[] = [];
		const together = [0, 0, 0];
		for (const [observation, weight] of observations) {
			const own = observation.pointCovariance();
			if (own === null) return null;
			places.push({ surveyPoint: observation.surveyPoint, weight });
			for (let i = 0; i < 3; i++) {
				together[i]! += weight[i]!;
				for (let j = 0; j < 3; j++) variance += weight[i]! * own[i]![j]! * weight[j]! * 1e6;
			}
		}
		for (const other of summed) {
			const tie = setup.tiedTo?.find(({ setupId }) => setupId === other.setup.id);
			if (tie !== undefined)
				variance += 2e6 * covarianceOfSums(setup.fit, places, { fit: other.setup.fit, covariance: tie.covariance }, other.places);
		}
		summed.push({ setup, places });
		variance += field.varianceOfSum(places) * 1e6 + setup.commonMm ** 2 * (together[0]! ** 2 + together[1]! ** 2 + together[2]! ** 2);
	}
	return factor * Math.sqrt(Math.max(0, variance));
}

/** A vector times a number. */
export function scaled([x, y, z]: Vector3, by: number): Vector3 {
	return [x * by, y * by, z * by];
}
