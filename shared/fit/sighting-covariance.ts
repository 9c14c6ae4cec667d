import type { Matrix3, Vector3 } from '#shared/geometry/frame.ts';

/** What a polar instrument (total station, scanner) knows of one sighting, one standard deviation each. */
export interface PolarInstrument {
	/** The constant part of a distance, metres. */
	distanceM: number;
	/** The part that grows with it: distance = constant + share·D, as instruments are stated (ISO 17123-4 for how they are tested). */
	distancePpm: number;
	/** A direction and a zenith angle, radians (ISO 17123-3). */
	angleRad: number;
}

/**
 * Covariance of a place sighted from a station: σ of the distance along the ray, D·σ of the angle across it, level and upright; and what the
 * target is off its mark, or the shot off the surface, on every axis alike. Frame of the places, m².
 * @param centringM σ of target on mark, or of pole and surface, metres
 */
export function sightingCovariance(instrument: PolarInstrument, station: Vector3, place: Vector3, centringM: number): Matrix3 {
	const ray = [0, 1, 2].map((k) => place[k]! - station[k]!) as [number, number, number];
	const range = Math.hypot(...ray);
	const level = Math.hypot(ray[0], ray[1]);
	const along = instrument.distanceM + instrument.distancePpm * 1e-6 * range;
	const own = centringM ** 2;
	if (range === 0) return diagonal(along ** 2 + own);
	// Straight up there is no bearing: any level axis does.
	const [cos, sin] = level > 0 ? [ray[0] / level, ray[1] / level] : [1, 0];
	const axes = [
		{ sigma: along, unit: ray.map((value) => value / range) },
		{ sigma: level * instrument.angleRad, unit: [-sin, cos, 0] },
		{ sigma: range * instrument.angleRad, unit: [(-cos * ray[2]) / range, (-sin * ray[2]) / range, level / range] },
	];
	return [0, 1, 2].map((row) =>
		[0, 1, 2].map((column) =>
			axes.reduce((sum, { sigma, unit }) => sum + sigma ** 2 * unit[row]! * unit[column]!, row === column ? own : 0),
		),
	) as unknown as Matrix3;
}

/** Standard deviations along the axes, metres: what an adjustment with one σ an axis takes of a covariance. */
export function sigmasOf(covariance: Matrix3): Vector3 {
	return [Math.sqrt(covariance[0][0]), Math.sqrt(covariance[1][1]), Math.sqrt(covariance[2][2])];
}

function diagonal(variance: number): Matrix3 {
	return [
		[variance, 0, 0],
		[0, variance, 0],
		[0, 0, variance],
	];
}
