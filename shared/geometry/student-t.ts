import { logGamma } from './log-gamma.ts';
import { twoSidedNormal } from './normal-distribution.ts';

/**
 * Student's t (Gosset 1908) by the incomplete beta function (Abramowitz & Stegun 1964, 26.5.8, 26.7.1), and Pope's tau built on it.
 */

/** The probability that |t| with `degrees` ≥ 1 is beyond `value` ≥ 0. */
export function studentTwoSidedTail(value: number, degrees: number): number {
	return incompleteBeta(degrees / (degrees + value * value), (value * value) / (degrees + value * value), degrees / 2, 0.5);
}

/** The probability that a ratio of two variance estimates, with `upper` and `lower` degrees ≥ 1, is beyond `value` ≥ 0 (Fisher's F). */
export function varianceRatioTail(value: number, upper: number, lower: number): number {
	const whole = lower + upper * value;
	return incompleteBeta(lower / whole, (upper * value) / whole, lower / 2, upper / 2);
}

/** I_x(a, b); `rest` = 1 − x is given by the caller, so that nothing is lost near x = 1. */
function incompleteBeta(x: number, rest: number, a: number, b: number): number {
	if (x <= 0) return 0;
	if (rest <= 0) return 1;
	const front = Math.exp(logGamma(a + b) - logGamma(a) - logGamma(b) + a * Math.log(x) + b * Math.log(rest));
	return x < (a + 1) / (a + b + 2) ? (front * betaFraction(x, a, b)) / a : 1 - (front * betaFraction(rest, b, a)) / b;
}

/** Lentz's evaluation of the continued fraction 26.5.8. */
function betaFraction(x: number, a: number, b: number): number {
	const tiny = 1e-300;
	let c = 1;
	let d = 1 / (1 - ((a + b) * x) / (a + 1) || tiny);
	let product = d;
	for (let m = 1; m < 10_000; m++) {
		let numerator = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
		d = 1 / (1 + numerator * d || tiny);
		c = 1 + numerator / c || tiny;
		product *= d * c;
		numerator = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
		d = 1 / (1 + numerator * d || tiny);
		c = 1 + numerator / c || tiny;
		const factor = d * c;
		product *= factor;
		if (Math.abs(factor - 1) < 1e-16) break;
	}
	return product;
}

/** The factor that |t| with `degrees` ≥ 1 stays under with probability 1 − significance; with infinite degrees the normal one. */
export function studentTwoSided(significance: number, degrees: number): number {
	if (!Number.isFinite(degrees)) return twoSidedNormal(significance);
	let low = 0;
	let high = 2;
	while (studentTwoSidedTail(high, degrees) > significance) high *= 2;
	for (let step = 0; step < 200 && high - low > 1e-15 * high; step++) {
		const middle = (low + high) / 2;
		if (studentTwoSidedTail(middle, degrees) > significance) low = middle;
		else high = middle;
	}
	return (low + high) / 2;
}

/**
 * Pope's tau, two-sided: what a residual over its own estimated σ is held against where no σ is known beforehand.
 * τ = t·√f/√(f − 1 + t²), t Student's with f − 1 (Pope 1976, NOAA TR NOS 65 NGS 1). With f = 1 it is 1 by construction.
 */
export function popeTau(significance: number, degrees: number): number {
	if (degrees <= 1) return 1;
	const t = studentTwoSided(significance, degrees - 1);
	return (t * Math.sqrt(degrees)) / Math.sqrt(degrees - 1 + t * t);
}
