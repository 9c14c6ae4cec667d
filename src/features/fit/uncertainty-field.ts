import { contours } from 'd3-contour';
import { carryPoint, coverageFactor, fitCovarianceAt, fitInflation } from '#shared/fit/carry-point.ts';
import type { FitResult } from '#shared/fit/fit-schema.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { StoredElement } from '#shared/model/contract.ts';

/** A rectangle in plan, design frame, metres. */
export interface PlanExtent {
	minE: number;
	minN: number;
	maxE: number;
	maxN: number;
}

/** The rectangle about all bodies of a model, design frame; null where none has a body. */
export function planExtentOf(elements: readonly StoredElement[]): PlanExtent | null {
	const boxes = elements.flatMap(({ boxM }) => (boxM ? [boxM] : []));
	if (boxes.length === 0) return null;
	return {
		minE: boxes.reduce((least, { min }) => Math.min(least, min[0]), Infinity),
		minN: boxes.reduce((least, { min }) => Math.min(least, min[1]), Infinity),
		maxE: boxes.reduce((most, { max }) => Math.max(most, max[0]), -Infinity),
		maxN: boxes.reduce((most, { max }) => Math.max(most, max[1]), -Infinity),
	};
}

/** One level of "known to ±U": its outline encloses what is known better. Closed rings of design E, N. */
export interface UncertaintyLevel {
	expandedUncertaintyMm: number;
	rings: [number, number][][];
}

/**
 * Where the fit alone is known to which expanded uncertainty in plan (long axis, k·u), as level lines over an extent.
 *
 * Frame  design, metres; the level is taken at `heightM`. U in mm.
 * Source u from J·Q·Jᵀ (GUM, JCGM 100, 5.1), inflated by σ̂₀ where the χ² test failed high.
 * Empty where the fit's uncertainty is not known.
 */
export function uncertaintyField(fit: FitResult, extent: PlanExtent, heightM: number, cells = 48): UncertaintyLevel[] {
	const factor = coverageFactor(fit);
	if (factor === null || fit.fit === 'height') return [];
	const width = extent.maxE - extent.minE;
	const depth = extent.maxN - extent.minN;
	const values: number[] = [];
	for (let row = 0; row < cells; row++) {
		for (let column = 0; column < cells; column++) {
			const east = extent.minE + ((column + 0.5) / cells) * width;
			const north = extent.minN + ((row + 0.5) / cells) * depth;
			values.push(planUncertaintyMm(fit, [east, north, heightM], factor));
		}
	}
	const least = Math.min(...values);
	const most = Math.max(...values);
	return roundLevels(least, most).map((level) => ({
		expandedUncertaintyMm: level,
		// The library finds where the value is at least the level, so the sign is turned: inside a ring is known better.
		rings: contours()
			.size([cells, cells])
			.contour(
				values.map((value) => -value),
				-level,
			)
			.coordinates.map((polygon) =>
				(polygon[0] ?? []).map(([x, y]): [number, number] => [
					extent.minE + ((x ?? 0) / cells) * width,
					extent.minN + ((y ?? 0) / cells) * depth,
				]),
			),
	}));
}

/** U of the fit in plan at a design point, mm, along the long axis; `factor` is the coverage factor k. */
export function planUncertaintyMm(fit: FitResult, designPoint: Vector3, factor: number): number {
	const covariance = fitCovarianceAt(fit, surveyPointAt(fit, designPoint));
	return 1000 * factor * fitInflation(fit) * Math.sqrt(longAxis(covariance[0][0], covariance[0][1], covariance[1][1]).variance);
}

/** The survey point that the fit carries to a design point; metres. One Newton step is exact, since the fit is affine in the point. */
export function surveyPointAt(fit: FitResult, designPoint: Vector3): Vector3 {
	const origin = carryPoint(fit, fit.origin);
	const heights = fit.scalesHeights === false ? 1 : fit.scale;
	const difference = [
		(designPoint[0] - origin[0]) / fit.scale,
		(designPoint[1] - origin[1]) / fit.scale,
		(designPoint[2] - origin[2]) / heights,
	];
	const back = (column: 0 | 1 | 2) =>
		fit.origin[column] + fit.rotation.reduce((sum, row, k) => sum + row[column] * (difference[k] ?? 0), 0);
	return [back(0), back(1), back(2)];
}

/** The ellipse of a plan covariance [[ee, en], [en, nn]]: variances of its axes and the long axis' turn from east, radians. */
export function longAxis(ee: number, en: number, nn: number): { variance: number; shortVariance: number; turnRad: number } {
	const middle = (ee + nn) / 2;
	const reach = Math.hypot((ee - nn) / 2, en);
	return { variance: middle + reach, shortVariance: Math.max(0, middle - reach), turnRad: 0.5 * Math.atan2(2 * en, ee - nn) };
}

/** Two to five round levels between the least and the most. */
function roundLevels(least: number, most: number): number[] {
	if (!(most > least) || !Number.isFinite(most)) return [];
	const step = [0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50, 100, 200, 500].find((candidate) => (most - least) / candidate <= 5) ?? 1000;
	const levels: number[] = [];
	for (let level = Math.ceil(least / step) * step; level < most; level += step) levels.push(Math.round(level * 10) / 10);
	return levels;
}
