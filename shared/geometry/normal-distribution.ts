import { upperErrorFunction } from './error-function.ts';

/** The standard normal distribution and its quantiles, to about 1e-15: critical values and coverage factors rest on them. */

/** The probability that a standard normal value is at most `z`, with a small relative error also far out. 0 at −∞, 1 at +∞, NaN for NaN. */
export function normalCdf(z: number): number {
	return upperErrorFunction(-z / Math.SQRT2) / 2;
}

/** The value that a standard normal stays under with `probability` (0 < probability < 1; ±∞ at the ends). Newton's method on normalCdf. */
export function normalQuantile(probability: number): number {
	if (probability <= 0) return -Infinity;
	if (probability >= 1) return Infinity;
	if (probability > 0.5) return -lowerQuantile(1 - probability);
	return lowerQuantile(probability);
}

function lowerQuantile(probability: number): number {
	// Hastings' rational start (Abramowitz & Stegun 26.2.23, error under 4.5e-4).
	const t = Math.sqrt(-2 * Math.log(probability));
	let z = ((0.010328 * t + 0.802853) * t + 2.515517) / (((0.001308 * t + 0.189269) * t + 1.432788) * t + 1) - t;
	for (let step = 0; step < 8; step++) {
		const density = Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI);
		const change = (normalCdf(z) - probability) / density;
		z -= change / (1 + (z * change) / 2);
		if (Math.abs(change) < 1e-15 * Math.abs(z)) break;
	}
	return z;
}

/** The factor that a two-sided test at `significance` holds a standard normal value against, e.g. 3.2905 at 0.001. */
export function twoSidedNormal(significance: number): number {
	return -normalQuantile(significance / 2);
}
