/** Colour arithmetic for the token test: sRGB, CIELAB 1976 (D65), WCAG contrast, and dichromat sight after Machado, Oliveira and Fernandes 2009 (severity 1). */

type Triple = readonly [number, number, number];

/** "#9e3c09" → linear-light red, green, blue, 0…1 (IEC 61966-2-1). */
export function linearOf(hex: string): Triple {
	const match = /^#([0-9a-f]{2})([0-9a-f]{2})([0-9a-f]{2})$/i.exec(hex);
	if (!match) throw new RangeError(`${hex} is no colour of six digits`);
	const [red, green, blue] = match.slice(1).map((digits) => {
		const value = Number.parseInt(digits, 16) / 255;
		return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
	});
	return [red!, green!, blue!];
}

const sights: Record<'normal' | 'protan' | 'deutan' | 'tritan', readonly [Triple, Triple, Triple]> = {
	normal: [
		[1, 0, 0],
		[0, 1, 0],
		[0, 0, 1],
	],
	protan: [
		[0.152286, 1.052583, -0.204868],
		[0.114503, 0.786281, 0.099216],
		[-0.003882, -0.048116, 1.051998],
	],
	deutan: [
		[0.367322, 0.860646, -0.227968],
		[0.280085, 0.672501, 0.047413],
		[-0.01182, 0.04294, 0.968881],
	],
	tritan: [
		[1.255528, -0.076749, -0.178779],
		[-0.078411, 0.930809, 0.147602],
		[0.004733, 0.691367, 0.3039],
	],
};
export type Sight = keyof typeof sights;
export const allSights = Object.keys(sights) as Sight[];

/** What a linear colour looks like to that sight, linear, clipped to what a screen shows. */
export function seenBy(sight: Sight, colour: Triple): Triple {
	const [red, green, blue] = sights[sight].map((row) => Math.min(1, Math.max(0, dot(row, colour))));
	return [red!, green!, blue!];
}

/** CIELAB 1976 of a linear sRGB colour, D65. */
export function labOf(colour: Triple): Triple {
	const x = dot([0.4124564, 0.3575761, 0.1804375], colour) / 0.95047;
	const y = dot([0.2126729, 0.7151522, 0.072175], colour);
	const z = dot([0.0193339, 0.119192, 0.9503041], colour) / 1.08883;
	const f = (t: number) => (t > (6 / 29) ** 3 ? Math.cbrt(t) : t / (3 * (6 / 29) ** 2) + 4 / 29);
	return [116 * f(y) - 16, 500 * (f(x) - f(y)), 200 * (f(y) - f(z))];
}

/** ΔE*ab 1976 between two colours as that sight sees them. */
export function deltaE(a: string, b: string, sight: Sight): number {
	const [first, second] = [a, b].map((hex) => labOf(seenBy(sight, linearOf(hex))));
	return Math.hypot(first![0] - second![0], first![1] - second![1], first![2] - second![2]);
}

/** WCAG 2.2 contrast ratio. */
export function contrast(a: string, b: string): number {
	const [lighter, darker] = [a, b].map((hex) => dot([0.2126, 0.7152, 0.0722], linearOf(hex))).sort((x, y) => y - x);
	return (lighter! + 0.05) / (darker! + 0.05);
}

function dot(a: Triple, b: Triple): number {
	return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}
