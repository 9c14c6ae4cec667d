import { logGamma } from './log-gamma.ts';
import { normalQuantile } from './normal-distribution.ts';

/**
 * The chi-square distribution by the incomplete gamma function.
 * Sources: Abramowitz & Stegun 1964, 6.5.29 (series), 6.5.31 (continued fraction); Wilson & Hilferty 1931 as the start of the quantile.
 */

/** The probability that a chi-square value with `degrees` > 0 is at most `value`. */
export function chiSquareCdf(value: number, degrees: number): number {
	if (!(value > 0)) return 0;
	const a = degrees / 2;
	const x = value / 2;
	return x < a + 1 ? lowerSeries(a, x) : 1 - upperFraction(a, x);
}

/** The probability that a chi-square value with `degrees` > 0 is beyond `value`; keeps its digits far out. */
export function chiSquareTail(value: number, degrees: number): number {
	if (!(value > 0)) return 1;
	const a = degrees / 2;
	const x = value / 2;
	return x < a + 1 ? 1 - lowerSeries(a, x) : upperFraction(a, x);
}

function lowerSeries(a: number, x: number): number {
	let term = 1 / a;
	let sum = term;
	for (let k = 1; k < 10_000; k++) {
		term *= x / (a + k);
		sum += term;
		if (term < sum * 1e-17) break;
	}
	return sum * Math.exp(a * Math.log(x) - x - logGamma(a));
}

/** Lentz's evaluation of the continued fraction. */
function upperFraction(a: number, x: number): number {
	const tiny = 1e-300;
	let b = x + 1 - a;
	let c = 1 / tiny;
	let d = 1 / (b || tiny);
	let product = d;
	for (let k = 1; k < 10_000; k++) {
		const numerator = -k * (k - a);
		b += 2;
		d = 1 / (numerator * d + b || tiny);
		c = b + numerator / c || tiny;
		const factor = d * c;
		product *= factor;
		if (Math.abs(factor - 1) < 1e-16) break;
	}
	return product * Math.exp(a * Math.log(x) - x - logGamma(a));
}

/** The value that a chi-square with `degrees` ≥ 1 stays under with `probability` (0 < probability < 1). */
export function chiSquareQuantile(probability: number, degrees: number): number {
	const third = 2 / (9 * degrees);
	let low = 0;
	let high = Math.max(10, 4 * degrees);
	while (chiSquareCdf(high, degrees) < probability) high *= 2;
	let value = degrees * Math.max(1 - third + normalQuantile(probability) * Math.sqrt(third), 0.01) ** 3;
	const small = probability < 0.5;
	for (let step = 0; step < 200; step++) {
		// Beside the far tail the difference of the small side is formed, so that no digit is lost.
		const excess = small ? chiSquareCdf(value, degrees) - probability : 1 - probability - chiSquareTail(value, degrees);
		if (excess > 0) high = value;
		else low = value;
		const density = Math.exp((degrees / 2 - 1) * Math.log(value / 2) - value / 2 - logGamma(degrees / 2)) / 2;
		let next = value - excess / density;
		if (!(next > low && next < high)) next = (low + high) / 2;
		const change = Math.abs(next - value);
		value = next;
		if (change <= 1e-15 * value) break;
	}
	return value;
}
