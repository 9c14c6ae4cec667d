/**
 * Singular values of three columns by one-sided Jacobi turns (Hestenes 1958). Small singular values come out with an error relative to the
 * columns, not to their squares, which the eigenvalues of a scatter matrix cannot give: that is what tells a thin triangle from a line.
 */

const SWEEPS = 40;

/**
 * Turns the three columns of `columns` until they are at right angles to one another, and gathers the turns in `right`.
 * @param columns rows × 3 numbers, row by row; on return columns·right of the input (left singular vectors times singular values)
 * @param rows how many rows, ≥ 1
 * @param right nine numbers, row by row; on return orthonormal: the right singular vectors are its columns
 * @param singular three numbers: on return the singular values, largest first; columns and right are in that order
 */
export function jacobiColumns(columns: Float64Array, rows: number, right: Float64Array, singular: Float64Array): void {
	right.fill(0);
	right[0] = right[4] = right[8] = 1;
	for (let sweep = 0; sweep < SWEEPS; sweep++) {
		let turned = false;
		for (let p = 0; p < 2; p++) {
			for (let q = p + 1; q < 3; q++) {
				let pp = 0;
				let qq = 0;
				let pq = 0;
				for (let at = 0; at < 3 * rows; at += 3) {
					const a = columns[at + p]!;
					const b = columns[at + q]!;
					pp += a * a;
					qq += b * b;
					pq += a * b;
				}
				if (pq === 0 || Math.abs(pq) <= 1e-17 * Math.sqrt(pp) * Math.sqrt(qq)) continue;
				const zeta = (qq - pp) / (2 * pq);
				const tangent = Math.sign(zeta || 1) / (Math.abs(zeta) + Math.sqrt(1 + zeta * zeta));
				const cosine = 1 / Math.sqrt(1 + tangent * tangent);
				const sine = cosine * tangent;
				if (Math.abs(sine) > 1e-17) turned = true;
				turnColumns(columns, rows, p, q, cosine, sine);
				turnColumns(right, 3, p, q, cosine, sine);
			}
		}
		if (!turned) break;
	}
	for (let k = 0; k < 3; k++) {
		let square = 0;
		for (let at = k; at < 3 * rows; at += 3) square += columns[at]! * columns[at]!;
		singular[k] = Math.sqrt(square);
	}
	if (singular[0]! < singular[1]!) swapColumns(columns, rows, right, singular, 0, 1);
	if (singular[1]! < singular[2]!) swapColumns(columns, rows, right, singular, 1, 2);
	if (singular[0]! < singular[1]!) swapColumns(columns, rows, right, singular, 0, 1);
}

function turnColumns(matrix: Float64Array, rows: number, p: number, q: number, cosine: number, sine: number): void {
	for (let at = 0; at < 3 * rows; at += 3) {
		const a = matrix[at + p]!;
		const b = matrix[at + q]!;
		matrix[at + p] = cosine * a - sine * b;
		matrix[at + q] = sine * a + cosine * b;
	}
}

function swapColumns(columns: Float64Array, rows: number, right: Float64Array, singular: Float64Array, p: number, q: number): void {
	for (const [matrix, count] of [
		[columns, rows],
		[right, 3],
		[singular, 1],
	] as const) {
		for (let at = 0; at < 3 * count; at += 3) {
			const kept = matrix[at + p]!;
			matrix[at + p] = matrix[at + q]!;
			matrix[at + q] = kept;
		}
	}
}

/**
 * The rotation R that makes trace(R·H) greatest, H = Σ w·x·yᵀ (Arun, Huang & Blostein 1987, determinant corrected as Umeyama 1991 has it).
 * Both triads are completed by cross products, so det R = +1 comes by itself, also where all points lie in a plane.
 * @param crossCovariance nine numbers, row by row: Σ w·x·yᵀ
 * @param rotation nine numbers, row by row: on return R, y ≈ R·x
 * @param singular on return the singular values of H, largest first, the third with the sign of det H: R is unique where second + third > 0
 */
export function bestRotation(crossCovariance: ArrayLike<number>, rotation: Float64Array, singular: Float64Array): void {
	const columns = Float64Array.from(crossCovariance);
	const right = new Float64Array(9);
	jacobiColumns(columns, 3, right, singular);
	const left = new Float64Array(9);
	const first = singular[0]! || 1;
	for (let row = 0; row < 3; row++) left[3 * row] = columns[3 * row]! / first;
	let along = 0;
	for (let row = 0; row < 3; row++) along += left[3 * row]! * columns[3 * row + 1]!;
	for (let row = 0; row < 3; row++) left[3 * row + 1] = columns[3 * row + 1]! - along * left[3 * row]!;
	let length = Math.hypot(left[1]!, left[4]!, left[7]!);
	if (!(length > 1e-290)) {
		// A single direction: any second one will do; the caller sees singular[1] = 0.
		const axis = Math.abs(left[0]!) < 0.7 ? 0 : 1;
		for (let row = 0; row < 3; row++) left[3 * row + 1] = (row === axis ? 1 : 0) - left[3 * axis]! * left[3 * row]!;
		length = Math.hypot(left[1]!, left[4]!, left[7]!);
	}
	for (let row = 0; row < 3; row++) left[3 * row + 1] = left[3 * row + 1]! / length;
	// Once more at unit length: of a column that was all but nil the first time left little.
	along = left[0]! * left[1]! + left[3]! * left[4]! + left[6]! * left[7]!;
	for (let row = 0; row < 3; row++) left[3 * row + 1] = left[3 * row + 1]! - along * left[3 * row]!;
	length = Math.hypot(left[1]!, left[4]!, left[7]!);
	for (let row = 0; row < 3; row++) left[3 * row + 1] = left[3 * row + 1]! / length;
	completeTriad(left);
	completeTriad(right);
	let third = 0;
	for (let row = 0; row < 3; row++) {
		for (let column = 0; column < 3; column++) third += left[3 * row + 2]! * crossCovariance[3 * row + column]! * right[3 * column + 2]!;
	}
	singular[2] = third < 0 ? -singular[2]! : singular[2]!;
	for (let row = 0; row < 3; row++) {
		for (let column = 0; column < 3; column++) {
			rotation[3 * row + column] =
				right[3 * row]! * left[3 * column]! + right[3 * row + 1]! * left[3 * column + 1]! + right[3 * row + 2]! * left[3 * column + 2]!;
		}
	}
}

/** Sets the third column to the cross product of the first two. */
function completeTriad(columns: Float64Array): void {
	columns[2] = columns[3]! * columns[7]! - columns[6]! * columns[4]!;
	columns[5] = columns[6]! * columns[1]! - columns[0]! * columns[7]!;
	columns[8] = columns[0]! * columns[4]! - columns[3]! * columns[1]!;
}
