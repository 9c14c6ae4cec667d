/** A symmetric 2×2 covariance of east and north; any unit, squared. */
export type PlanCovariance = readonly [readonly [number, number], readonly [number, number]];

/** The product and what rounding took from it, so that their sum is exact (Dekker 1971; Veltkamp's splitting). */
function exactProduct(a: number, b: number): [number, number] {
	const product = a * b;
	const splitA = 134217729 * a;
	const highA = splitA - (splitA - a);
	const lowA = a - highA;
	const splitB = 134217729 * b;
	const highB = splitB - (splitB - b);
	const lowB = b - highB;
	return [product, lowA * lowB - (product - highA * highB - lowA * highB - highA * lowB)];
}

/** a·c − b·b without cancellation: what decides whether a covariance is singular. Entries of about unit size. */
function determinant(a: number, b: number, c: number): number {
	const [ac, acRest] = exactProduct(a, c);
	const [bb, bbRest] = exactProduct(b, b);
	return ac - bb + (acRest - bbRest);
}

export interface PrincipalAxes {
	/** Standard deviations along the long and the short axis. */
	readonly longSigma: number;
	readonly shortSigma: number;
	/** Unit vector of the long axis; the short one is that turned a quarter counter-clockwise. */
	readonly long: readonly [number, number];
}

/**
 * The error ellipse of a plan covariance. Entries of any size from 1e-300 to 1e300; a determinant that is negative by rounding counts as zero.
 * Source: closed form of the symmetric 2×2 eigenvalue problem, the smaller value from the determinant, so that it does not cancel.
 */
export function principalAxes(covariance: PlanCovariance): PrincipalAxes {
	const largest = Math.max(Math.abs(covariance[0][0]), Math.abs(covariance[1][1]), Math.abs(covariance[0][1]), Math.abs(covariance[1][0]));
	if (largest === 0) return { longSigma: 0, shortSigma: 0, long: [1, 0] };
	const a = covariance[0][0] / largest;
	const c = covariance[1][1] / largest;
	const b = (covariance[0][1] / largest + covariance[1][0] / largest) / 2;
	const long = (a + c) / 2 + Math.hypot((a - c) / 2, b);
	const short = long > 0 ? Math.max(0, determinant(a, b, c) / long) : 0;
	const turnRad = Math.atan2(2 * b, a - c) / 2;
	const unit = Math.sqrt(largest);
	return {
		longSigma: unit * Math.sqrt(Math.max(0, long)),
		shortSigma: unit * Math.sqrt(short),
		long: [Math.cos(turnRad), Math.sin(turnRad)],
	};
}

/** The standard deviation along a direction (any length but zero). For a zero direction the long axis, as CLI.md `judge` asks. */
export function sigmaAlong(covariance: PlanCovariance, direction: readonly [number, number]): number {
	const largestPart = Math.max(Math.abs(direction[0]), Math.abs(direction[1]));
	if (largestPart === 0) return principalAxes(covariance).longSigma;
	const east = direction[0] / largestPart;
	const north = direction[1] / largestPart;
	const length = Math.sqrt(east * east + north * north);
	const e = east / length;
	const n = north / length;
	const largest = Math.max(Math.abs(covariance[0][0]), Math.abs(covariance[1][1]), Math.abs(covariance[0][1]), Math.abs(covariance[1][0]));
	if (largest === 0) return 0;
	const cross = covariance[0][1] / largest / 2 + covariance[1][0] / largest / 2;
	const variance = (e * covariance[0][0] * e) / largest + 2 * e * cross * n + (n * covariance[1][1] * n) / largest;
	return Math.sqrt(largest) * Math.sqrt(Math.max(0, variance));
}

/** Whether a matrix can be a covariance: symmetric and without a negative variance in any direction, but for rounding (1e-9 of its size). */
export function isPlanCovariance(covariance: PlanCovariance): boolean {
	const [[a, b], [d, c]] = covariance;
	const size = Math.max(Math.abs(a), Math.abs(b), Math.abs(c), Math.abs(d));
	if (size === 0) return true;
	if (a < 0 || c < 0 || Math.abs(b / size - d / size) > 1e-9) return false;
	return determinant(a / size, (b / size + d / size) / 2, c / size) >= -1e-9;
}
