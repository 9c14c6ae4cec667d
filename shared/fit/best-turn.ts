import { bestRotation } from '#shared/geometry/singular-values.ts';

/** The quick way is taken where the two smaller singular values together are at least this share of the largest; nearer to a line, turns of Jacobi. */
const SOUND_SHARE = 0.02;
/** The quick way ends when a step of the iteration is under this share of the root. */
const ROOT_END = 1e-9;

/**
 * The rotation R that makes trace(R·H) greatest, as bestRotation, at a fifth of its cost wherever the points are well apart.
 *
 * λ = d₁ + d₂ ± d₃ is the largest root of (λ² − ‖H‖²)² − 8·det H·λ − 4·‖adj H‖² (Horn 1987), found by Newton steps from above, and
 * R = [(κ + ‖H‖²)·Hᵀ + λ·adj(H) − Hᵀ·H·Hᵀ] / (κ·λ − det H), κ = (λ² − ‖H‖²)/2 (Markley 1993, J. Astronautical Sciences 41(2)): no turn, no case.
 * The denominator is (d₁ + d₂)(d₂ ± d₃)(d₁ ± d₃), so it is as exact as bestRotation where d₂ ± d₃ is a fair share of d₁, and left to it elsewhere.
 * @param cross nine numbers, row by row: H = Σ w·x·yᵀ
 * @param rotation nine numbers, row by row: on return R, y ≈ R·x
 * @param singular on return d₁ ≥ d₂ ≥ |d₃|, the third with the sign of det H; to 1e-8 of the first, as much as a test of degeneracy needs
 */
export function bestTurn(cross: Float64Array, rotation: Float64Array, singular: Float64Array): void {
	if (!quickTurn(cross, rotation, singular)) bestRotation(cross, rotation, singular);
}

/** False, with nothing promised of what was written, where the points lie too near a line or a mirror image fits better. */
function quickTurn(cross: Float64Array, rotation: Float64Array, singular: Float64Array): boolean {
	const a = cross[0]!;
	const b = cross[1]!;
	const c = cross[2]!;
	const d = cross[3]!;
	const e = cross[4]!;
	const f = cross[5]!;
	const g = cross[6]!;
	const h = cross[7]!;
	const k = cross[8]!;
	// Cofactors.
	const A = e * k - f * h;
	const B = f * g - d * k;
	const C = d * h - e * g;
	const D = c * h - b * k;
	const E = a * k - c * g;
	const F = b * g - a * h;
	const G = b * f - c * e;
	const H = c * d - a * f;
	const K = a * e - b * d;
	const determinant = a * A + b * B + c * C;
	// HᵀH, of which the trace is the square of the norm.
	const xx = a * a + d * d + g * g;
	const yy = b * b + e * e + h * h;
	const zz = c * c + f * f + k * k;
	const square = xx + yy + zz;
	const minors = A * A + B * B + C * C + D * D + E * E + F * F + G * G + H * H + K * K;
	// λ² = ‖H‖² + 2·√(‖adj H‖² + 2·det·λ): put through once from the bound √3·‖H‖ it is a near bound from above.
	let root = Math.sqrt(square + 2 * Math.sqrt(minors + (determinant > 0 ? 2 * determinant * Math.sqrt(3 * square) : 0)));
	let step = root;
	let left = 24;
	while (step > ROOT_END * root && left > 0) {
		const over = root * root - square;
		step = (over * over - 8 * determinant * root - 4 * minors) / (4 * over * root - 8 * determinant);
		root -= step;
		left--;
	}
	const kappa = (root * root - square) / 2;
	const denominator = kappa * root - determinant;
	// The smallest singular value, signed, from the cubic that has all three as roots, by Newton steps from nil.
	let least = determinant / kappa;
	for (step = root; Math.abs(step) > ROOT_END * root && left > 0; left--) {
		step = (((least - root) * least + kappa) * least - determinant) / ((3 * least - 2 * root) * least + kappa);
		least -= step;
	}
	const pair = root - least;
	const half = pair / 2;
	const apart = half * half - (kappa - least * pair);
	const away = apart > 0 ? Math.sqrt(apart) : 0;
	const first = half + away;
	const second = half - away;
	singular[0] = first;
	singular[1] = second;
	singular[2] = least;
	// Written so that anything that is no number fails as well.
	if (!(left > 0 && kappa > 0 && second + least > SOUND_SHARE * first && Math.abs(least) <= second * (1 + 1e-6))) return false;
	const xy = a * b + d * e + g * h;
	const xz = a * c + d * f + g * k;
	const yz = b * c + e * f + h * k;
	const over = 1 / denominator;
	const own = (kappa + square) * over;
	const adjoint = root * over;
	const px = xx * over;
	const py = yy * over;
	const pz = zz * over;
	const pxy = xy * over;
	const pxz = xz * over;
	const pyz = yz * over;
	rotation[0] = own * a + adjoint * A - (px * a + pxy * b + pxz * c);
	rotation[1] = own * d + adjoint * D - (px * d + pxy * e + pxz * f);
	rotation[2] = own * g + adjoint * G - (px * g + pxy * h + pxz * k);
	rotation[3] = own * b + adjoint * B - (pxy * a + py * b + pyz * c);
	rotation[4] = own * e + adjoint * E - (pxy * d + py * e + pyz * f);
	rotation[5] = own * h + adjoint * H - (pxy * g + py * h + pyz * k);
	rotation[6] = own * c + adjoint * C - (pxz * a + pyz * b + pz * c);
	rotation[7] = own * f + adjoint * F - (pxz * d + pyz * e + pz * f);
	rotation[8] = own * k + adjoint * K - (pxz * g + pyz * h + pz * k);
	return true;
}
