import { fitCovarianceBetween, fitInflation, type TiedFit } from '../fit/carry-point.ts';
import type { FitResult } from '../fit/fit-schema.ts';
import type { Matrix3, Vector3 } from '../geometry/frame.ts';

/** One place's share in a sum: wᵀ·(carried place), w in the control frame. */
export interface WeightedPlace {
	readonly surveyPoint: Vector3;
	readonly weight: Vector3;
}

/**
 * The covariance that a fit gives to any place and between any two, m², design frame, from sixteen matrices computed once.
 * J is affine in the survey point, so that J(p) is a mean of its values at four places, and J_p·Q·J_qᵀ the same mean of theirs.
 * A fit whose σ failed the χ² test high counts with σ̂₀, as DOMAIN.md asks.
 */
export interface FitCovarianceField {
	/** False where the fit has no σ and no redundancy: nothing is known of it. */
	readonly isKnown: boolean;
	/** J·Q·Jᵀ at one place. */
	at(surveyPoint: Vector3): Matrix3;
	/** The variance of Σ wᵢᵀ·yᵢ over carried places yᵢ, with all that they share; m². */
	varianceOfSum(terms: readonly WeightedPlace[]): number;
}

/** Far enough that the mean's weights stay near one on a site, metres. */
const baseLengthM = 100;

/** Builds the field of one fit. */
export function fitCovarianceField(fit: FitResult): FitCovarianceField {
	const [ox, oy, oz] = fit.origin;
	const base: Vector3[] = [fit.origin, [ox + baseLengthM, oy, oz], [ox, oy + baseLengthM, oz], [ox, oy, oz + baseLengthM]];
	const inflation = fitInflation(fit) ** 2;
	const blocks = base.map((p) => base.map((q) => fitCovarianceBetween(fit, p, q)));
	const isKnown = blocks.every((row) => row.every((block) => block.every((line) => line.every(Number.isFinite))));
	const shares = (point: Vector3): [number, number, number, number] => {
		const x = (point[0] - ox) / baseLengthM;
		const y = (point[1] - oy) / baseLengthM;
		const z = (point[2] - oz) / baseLengthM;
		return [1 - x - y - z, x, y, z];
	};
	return {
		isKnown,
		at(surveyPoint) {
			const share = shares(surveyPoint);
			const sum = [0, 0, 0, 0, 0, 0, 0, 0, 0];
			for (let k = 0; k < 4; k++) {
				for (let l = 0; l < 4; l++) {
					const factor = inflation * share[k]! * share[l]!;
					const block = blocks[k]![l]!;
					for (let i = 0; i < 9; i++) sum[i]! += factor * block[(i / 3) | 0]![i % 3]!;
				}
			}
			return [
				[sum[0]!, sum[1]!, sum[2]!],
				[sum[3]!, sum[4]!, sum[5]!],
				[sum[6]!, sum[7]!, sum[8]!],
			];
		},
		varianceOfSum(terms) {
			const weights = [0, 1, 2, 3].map(() => [0, 0, 0]);
			for (const { surveyPoint, weight } of terms) {
				const share = shares(surveyPoint);
				for (let k = 0; k < 4; k++) for (let axis = 0; axis < 3; axis++) weights[k]![axis]! += share[k]! * weight[axis]!;
			}
			let variance = 0;
			for (let k = 0; k < 4; k++) {
				for (let l = 0; l < 4; l++) {
					for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) variance += weights[k]![i]! * blocks[k]![l]![i]![j]! * weights[l]![j]!;
				}
			}
			return Math.max(0, inflation * variance);
		},
	};
}

/**
 * The covariance of Σ wᵢᵀ·yᵢ over places carried by one fit with Σ wⱼᵀ·yⱼ over places carried by another that was made together with it:
 * wᵢᵀ·J_p·Q_ab·J_qᵀ·wⱼ, m². Both have the same variance factor, and count with σ̂₀ alike.
 */
export function covarianceOfSums(fit: FitResult, terms: readonly WeightedPlace[], tied: TiedFit, others: readonly WeightedPlace[]): number {
	let sum = 0;
	for (const { surveyPoint: p, weight: a } of terms) {
		for (const { surveyPoint: q, weight: b } of others) {
			const block = fitCovarianceBetween(fit, p, q, tied);
			for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) sum += a[i]! * block[i]![j]! * b[j]!;
		}
	}
	return sum * fitInflation(fit) ** 2;
}
