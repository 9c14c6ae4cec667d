import { carriedPointCovariance, carryPoint } from '../fit/carry-point.ts';
import type { Matrix3, Vector3 } from '../geometry/frame.ts';
import type { CheckInputPoint, CheckInputSetup } from './check-input.ts';
import { type FitCovarianceField, fitCovarianceField } from './fit-covariance-field.ts';

/** A set-up with what is computed once for it. */
export interface PreparedSetup {
	readonly setup: CheckInputSetup;
	readonly field: FitCovarianceField;
	readonly isHeightsOnly: boolean;
}

/** One place as measured: a survey point, or the mean of its repeats in one set-up. */
export interface Observation {
	readonly name: string;
	readonly key: string;
	readonly code: string;
	readonly setup: PreparedSetup;
	readonly surveyPoint: Vector3;
	/** Design frame, before any offset. */
	readonly carried: Vector3;
	readonly offsetMm: number;
	readonly pointCount: number;
	/** The point's own covariance (of the mean), m², design frame; null where its σ is not known. */
	pointCovariance(): Matrix3 | null;
	/** The greatest distance between two repeats, mm; null for a single point. */
	readonly spreadMm: number | null;
	/** Whether two repeats differ by more than 3σ√2 along an axis. */
	readonly isSpreadTooWide: boolean;
}

export function prepareSetup(setup: CheckInputSetup): PreparedSetup {
	return { setup, field: fitCovarianceField(setup.fit), isHeightsOnly: setup.fit.fit === 'height' };
}

function sigmaOf(point: CheckInputPoint, setup: CheckInputSetup): Vector3 | null {
	if (point.sigmaM) return point.sigmaM;
	if (setup.pointSigmaM) return setup.pointSigmaM;
	// With no σ anywhere, σ̂₀ is what one measured coordinate of this set-up was found to scatter by (variance factor for weight 1).
	const { chiSquare, sigmaGiven, varianceFactor, redundancy } = setup.fit;
	if ((sigmaGiven ?? chiSquare !== null) || varianceFactor === null || redundancy < 1) return null;
	const sigmaM = Math.sqrt(varianceFactor) / setup.fit.scale;
	return [sigmaM, sigmaM, sigmaM];
}

/** The mean of repeats: their covariances add up to that of the mean, divided by n². */
export function observe(points: readonly CheckInputPoint[], key: string, setup: PreparedSetup): Observation {
	const first = points[0]!;
	const n = points.length;
	const surveyPoint = [0, 1, 2].map((axis) => {
		const start = first.surveyPoint[axis]!;
		return start + points.reduce((sum, point) => sum + (point.surveyPoint[axis]! - start), 0) / n;
	}) as unknown as Vector3;
	const spread = n === 1 ? null : spreadOf(points, setup.setup);
	return {
		name: first.name,
		key,
		code: first.code ?? '',
		setup,
		surveyPoint,
		carried: carryPoint(setup.setup.fit, surveyPoint),
		offsetMm: points.reduce((sum, point) => sum + point.offsetMm, 0) / n,
		pointCount: n,
		pointCovariance: () => meanCovariance(points, setup.setup),
		spreadMm: spread === null ? null : spread.largestM * 1000,
		isSpreadTooWide: spread?.isTooWide ?? false,
	};
}

function meanCovariance(points: readonly CheckInputPoint[], setup: CheckInputSetup): Matrix3 | null {
	const variances = [0, 0, 0];
	for (const point of points) {
		const sigma = sigmaOf(point, setup);
		if (sigma === null) return null;
		for (let axis = 0; axis < 3; axis++) variances[axis]! += sigma[axis]! ** 2;
	}
	return carriedPointCovariance(setup.fit, variances.map((variance) => Math.sqrt(variance) / points.length) as unknown as Vector3);
}

function spreadOf(points: readonly CheckInputPoint[], setup: CheckInputSetup): { largestM: number; isTooWide: boolean } {
	let largestM = 0;
	let isTooWide = false;
	for (let i = 0; i < points.length; i++) {
		const sigmaA = sigmaOf(points[i]!, setup);
		for (let j = 0; j < i; j++) {
			const difference = [0, 1, 2].map((axis) => points[i]!.surveyPoint[axis]! - points[j]!.surveyPoint[axis]!);
			largestM = Math.max(largestM, Math.hypot(...difference));
			const sigmaB = sigmaOf(points[j]!, setup);
			if (sigmaA === null || sigmaB === null) continue;
			// σ of a difference of two is √(σa² + σb²) = σ√2 where both are alike.
			isTooWide ||= difference.some((d, axis) => Math.abs(d) > 3 * Math.hypot(sigmaA[axis]!, sigmaB[axis]!) + 1e-12);
		}
	}
	return { largestM, isTooWide };
}
