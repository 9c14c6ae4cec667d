/**
 * Positive definite systems of a few unknowns, flat arrays, nothing allocated: normal equations of the fit.
 * The matrix is first scaled to a unit diagonal, so that metres, radians and ratios do not spoil the condition (van der Sluis 1969).
 */

/**
 * Inverts a symmetric positive definite matrix in place.
 * @param matrix size × size numbers, row by row, both triangles filled; on return its inverse
 * @returns false where the matrix is not positive definite to working precision; `matrix` is then spoilt
 */
export function invertPositiveDefinite(matrix: Float64Array, size: number): boolean {
	const scale = new Float64Array(size);
	for (let i = 0; i < size; i++) {
		const diagonal = matrix[i * size + i]!;
		if (!(diagonal > 0) || !Number.isFinite(diagonal)) return false;
		scale[i] = 1 / Math.sqrt(diagonal);
	}
	for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) matrix[i * size + j] = matrix[i * size + j]! * scale[i]! * scale[j]!;
	// Lower triangle L of matrix = L·Lᵀ.
	for (let j = 0; j < size; j++) {
		let pivot = matrix[j * size + j]!;
		for (let k = 0; k < j; k++) pivot -= matrix[j * size + k]! * matrix[j * size + k]!;
		if (!(pivot > 4e-16)) return false;
		const root = Math.sqrt(pivot);
		matrix[j * size + j] = root;
		for (let i = j + 1; i < size; i++) {
			let sum = matrix[i * size + j]!;
			for (let k = 0; k < j; k++) sum -= matrix[i * size + k]! * matrix[j * size + k]!;
			matrix[i * size + j] = sum / root;
		}
	}
	// L ← L⁻¹, then inverse = L⁻ᵀ·L⁻¹.
	for (let j = 0; j < size; j++) {
		matrix[j * size + j] = 1 / matrix[j * size + j]!;
		for (let i = j + 1; i < size; i++) {
			let sum = 0;
			for (let k = j; k < i; k++) sum -= matrix[i * size + k]! * matrix[k * size + j]!;
			matrix[i * size + j] = sum / matrix[i * size + i]!;
		}
	}
	for (let i = 0; i < size; i++) {
		for (let j = 0; j <= i; j++) {
			let sum = 0;
			for (let k = i; k < size; k++) sum += matrix[k * size + i]! * matrix[k * size + j]!;
			// The upper triangle takes the result: the lower one is still being read.
			matrix[j * size + i] = sum * scale[i]! * scale[j]!;
		}
	}
	for (let i = 0; i < size; i++) for (let j = 0; j < i; j++) matrix[i * size + j] = matrix[j * size + i]!;
	return true;
}
