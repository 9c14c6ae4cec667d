import { integrateBetween } from '../geometry/adaptive-quadrature.ts';
import { normalBetween, normalDensity } from '../geometry/error-function.ts';
import { type PlanCovariance, principalAxes } from '../geometry/plan-covariance.ts';

/**
 * How far out a normal value still counts, in standard deviations: beyond lies 1e-15.
 * The steps are where an integrand that is one normal density or step changes.
 */
const reach = 8;
const steps = [-8, -5, -3, -1.5, 0, 1.5, 3, 5, 8];

/**
 * The probability that a bivariate normal value with this mean and covariance lies in the closed disc about zero. Any one unit of length.
 *
 * Method: in the ellipse's axes the short one is integrated in closed form, P = ∫ φ((x−m₁)/σ₁)/σ₁·[Φ((h−m₂)/σ₂) − Φ((−h−m₂)/σ₂)] dx with
 * h = √(r²−x²). With x = r·sin θ the integrand is periodic and analytic, so that the trapezoidal sum converges geometrically (Trefethen &
 * Weideman 2014, SIAM Review 56, 385–458): taken where its features are no finer than 1/16 of the radius. Sharper ones are integrated piece by
 * piece between the places where density and step change. Right to 1e-10, for singular, tiny and huge covariances alike
 * (tests/check/plan-conformity.test.ts holds it against 40-digit quadrature).
 */
export function probabilityInDisc(mean: readonly [number, number], covariance: PlanCovariance, radius: number): number {
	const axes = principalAxes(covariance);
	const size = Math.max(radius, Math.abs(mean[0]), Math.abs(mean[1]), axes.longSigma);
	if (size === 0) return 1;
	const r = radius / size;
	const longSigma = axes.longSigma / size;
	const shortSigma = axes.shortSigma / size;
	const east = mean[0] / size;
	const north = mean[1] / size;
	const distance = Math.sqrt(east * east + north * north);
	if (longSigma === 0) return distance <= r * (1 + 4 * Number.EPSILON) ? 1 : 0;
	// Within the distance to the circle lies all but e^(−reach²/2) of the mass, whatever the shape.
	if (r - distance > 8.5 * longSigma) return 1;
	if (distance - r > 8.5 * longSigma || r === 0) return 0;
	const m1 = Math.abs(east * axes.long[0] + north * axes.long[1]);
	const m2 = Math.abs(north * axes.long[0] - east * axes.long[1]);
	if (shortSigma === 0) {
		const halfChord = Math.sqrt(Math.max(0, (r - m2) * (r + m2)));
		return normalBetween((-halfChord - m1) / longSigma, (halfChord - m1) / longSigma);
	}
	const integrand = (theta: number): number => {
		const z = (r * Math.sin(theta) - m1) / longSigma;
		if (Math.abs(z) > 9) return 0;
		const h = r * Math.cos(theta);
		return ((h * normalDensity(z)) / longSigma) * normalBetween((-h - m2) / shortSigma, (h - m2) / shortSigma);
	};
	if (r <= 16 * shortSigma) {
		const count = 8 + Math.ceil(7 * (r / shortSigma));
		let sum = 0;
		for (let k = 0; k < count; k++) sum += integrand(-Math.PI / 2 + ((k + 0.5) * Math.PI) / count);
		return clampProbability((sum * Math.PI) / count);
	}
	const breaks = [-r, r];
	const addBreak = (x: number): void => {
		if (Math.abs(x) < r) breaks.push(x);
	};
	for (const k of steps) {
		addBreak(m1 + k * longSigma);
		const edge = m2 + k * shortSigma;
		if (Math.abs(edge) < r) {
			const halfChord = Math.sqrt((r - edge) * (r + edge));
			addBreak(halfChord);
			addBreak(-halfChord);
		}
	}
	const from = Math.max(-r, m1 - reach * longSigma);
	const to = Math.min(r, m1 + reach * longSigma);
	if (!(from < to)) return 0;
	const inside = breaks.filter((x) => x > from && x < to);
	const angle = (x: number): number => Math.atan2(x, Math.sqrt(Math.max(0, (r - x) * (r + x))));
	return clampProbability(integrateBetween(integrand, [from, ...inside, to].map(angle), 1e-12));
}

/**
 * The probability that a bivariate normal value lies in a closed box: lower and upper side along two axes, the first turned by yaw from east,
 * counter-clockwise. A side may be null. Any one unit of length. Right to 1e-10 by the same piecewise quadrature over the conditional normal.
 */
export function probabilityInBox(
	mean: readonly [number, number],
	covariance: PlanCovariance,
	box: { readonly lower: number | null; readonly upper: number | null; readonly yawRad: number },
): number {
	const turned = turnPlan(mean, covariance, box.yawRad);
	const lower = box.lower ?? Number.NEGATIVE_INFINITY;
	const upper = box.upper ?? Number.POSITIVE_INFINITY;
	// The axis with the larger spread is integrated numerically, so that what is sharp is done in closed form.
	const swap = turned.covariance[1][1] > turned.covariance[0][0];
	const [m1, m2] = swap ? [turned.mean[1], turned.mean[0]] : turned.mean;
	const [v1, v2] = swap ? [turned.covariance[1][1], turned.covariance[0][0]] : [turned.covariance[0][0], turned.covariance[1][1]];
	const sigma1 = Math.sqrt(v1);
	if (sigma1 === 0) return m1 >= lower && m1 <= upper && m2 >= lower && m2 <= upper ? 1 : 0;
	const axes = principalAxes(covariance);
	const slope = turned.covariance[0][1] / v1;
	const restSigma = (axes.longSigma / sigma1) * axes.shortSigma;
	const along = (z: number): number => m2 + slope * sigma1 * z;
	const from = Math.max(-9, (lower - m1) / sigma1);
	const to = Math.min(9, (upper - m1) / sigma1);
	if (!(from <= to) || v2 < 0) return 0;
	if (restSigma === 0) {
		if (slope === 0) return m2 >= lower && m2 <= upper ? normalBetween(from, to) : 0;
		const ends = [(lower - m2) / (slope * sigma1), (upper - m2) / (slope * sigma1)].sort((a, b) => a - b) as [number, number];
		return normalBetween(Math.max(from, ends[0]), Math.min(to, ends[1]));
	}
	const breaks = [from, to, -5, -3, -1.5, 0, 1.5, 3, 5];
	for (const edge of [lower, upper]) {
		if (!Number.isFinite(edge) || slope === 0) continue;
		for (const k of steps) breaks.push((edge + k * restSigma - m2) / (slope * sigma1));
	}
	const integrand = (z: number): number => normalDensity(z) * normalBetween((lower - along(z)) / restSigma, (upper - along(z)) / restSigma);
	return clampProbability(
		integrateBetween(
			integrand,
			breaks.filter((z) => z >= from && z <= to),
			1e-12,
		),
	);
}

/** A plan vector and its covariance in axes turned by yaw, counter-clockwise from east. */
export function turnPlan(
	vector: readonly [number, number],
	covariance: PlanCovariance,
	yawRad: number,
): { mean: [number, number]; covariance: [[number, number], [number, number]] } {
	const c = Math.cos(yawRad);
	const s = Math.sin(yawRad);
	const cross = (covariance[0][1] + covariance[1][0]) / 2;
	const [[a], [, d]] = covariance as [[number, number], [number, number]];
	const off = (d - a) * c * s + cross * (c * c - s * s);
	return {
		mean: [c * vector[0] + s * vector[1], c * vector[1] - s * vector[0]],
		covariance: [
			[a * c * c + 2 * cross * c * s + d * s * s, off],
			[off, a * s * s - 2 * cross * c * s + d * c * c],
		],
	};
}

function clampProbability(probability: number): number {
	return Math.min(1, Math.max(0, probability));
}
