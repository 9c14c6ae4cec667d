import fc from 'fast-check';
import { Matrix, SVD } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { invertPositiveDefinite } from '#shared/geometry/cholesky.ts';
import { rotationVector, turnAfter } from '#shared/geometry/rotation.ts';
import { bestRotation, jacobiColumns } from '#shared/geometry/singular-values.ts';

/** No numbers under 1e-4 but 0: ml-matrix answers √2 too much where entries of 1e-324 stand beside 1e-6. */
const numbers = (count: number) =>
	fc.array(
		fc.integer({ min: -1_000_000, max: 1_000_000 }).map((value) => value / 1e4),
		{ minLength: count, maxLength: count },
	);

describe('small linear algebra', () => {
	it('has the singular values of ml-matrix', () => {
		fc.assert(
			fc.property(
				fc.integer({ min: 3, max: 9 }).chain((rows) => numbers(3 * rows)),
				(values) => {
					const rows = values.length / 3;
					const columns = Float64Array.from(values);
					const singular = new Float64Array(3);
					jacobiColumns(columns, rows, new Float64Array(9), singular);
					const want = new SVD(Matrix.from1DArray(rows, 3, values)).diagonal;
					want.forEach((value, k) => {
						expect(Math.abs(singular[k]! - value)).toBeLessThan(1e-11 * (1 + want[0]!));
					});
				},
			),
			{ numRuns: 200 },
		);
	});

	it('keeps a singular value of 1e-9 beside one of 1e6', () => {
		const columns = Float64Array.of(1e6, 1e6, 0, 0, 1e-9, 0, 0, 0, 0);
		const singular = new Float64Array(3);
		jacobiColumns(columns, 3, new Float64Array(9), singular);
		expect(singular[1]! / (1e-9 / Math.SQRT2)).toBeCloseTo(1, 9);
	});

	it('finds no better rotation than the best, and always one with determinant +1', () => {
		fc.assert(
			fc.property(numbers(9), numbers(3), (values, [a, b, c]) => {
				const rotation = new Float64Array(9);
				const singular = new Float64Array(3);
				bestRotation(values, rotation, singular);
				const gain = (r: ArrayLike<number>): number =>
					[0, 1, 2].reduce((sum, k) => sum + [0, 1, 2].reduce((row, l) => row + r[3 * k + l]! * values[3 * l + k]!, 0), 0);
				const determinant =
					rotation[0]! * (rotation[4]! * rotation[8]! - rotation[5]! * rotation[7]!) -
					rotation[1]! * (rotation[3]! * rotation[8]! - rotation[5]! * rotation[6]!) +
					rotation[2]! * (rotation[3]! * rotation[7]! - rotation[4]! * rotation[6]!);
				if (singular[0]! > 1e-9) expect(determinant).toBeCloseTo(1, 9);
				const other = rotation.slice();
				turnAfter(other, a! / 30, b! / 30, c! / 30);
				expect(gain(other)).toBeLessThan(gain(rotation) + 1e-9 * (1 + singular[0]!));
			}),
			{ numRuns: 300 },
		);
	});

	it('gives back the rotation vector that it turned by', () => {
		fc.assert(
			fc.property(numbers(3), ([x, y, z]) => {
				const length = Math.hypot(x!, y!, z!);
				fc.pre(length > 0);
				const angle = Math.min(length, 3.1);
				const turn = [x!, y!, z!].map((value) => (value / length) * angle);
				const rotation = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
				turnAfter(rotation, turn[0]!, turn[1]!, turn[2]!);
				rotationVector(rotation).forEach((value, k) => {
					expect(Math.abs(value - turn[k]!)).toBeLessThan(1e-9);
				});
			}),
			{ numRuns: 200 },
		);
	});

	it('inverts normal matrices whatever their units, and refuses singular ones', () => {
		fc.assert(
			fc.property(numbers(24), fc.array(fc.double({ min: -8, max: 8, noNaN: true }), { minLength: 4, maxLength: 4 }), (values, powers) => {
				const rows = Matrix.from1DArray(6, 4, values).add(Matrix.eye(6, 4).mul(300));
				const scaled = rows.mmul(Matrix.diag(powers.map((power) => 10 ** power)));
				const normal = scaled.transpose().mmul(scaled);
				const inverse = Float64Array.from(normal.to1DArray());
				expect(invertPositiveDefinite(inverse, 4)).toBe(true);
				const product = normal.mmul(Matrix.from1DArray(4, 4, Array.from(inverse)));
				for (let k = 0; k < 4; k++) expect(product.get(k, k)).toBeCloseTo(1, 8);
			}),
			{ numRuns: 200 },
		);
		expect(invertPositiveDefinite(Float64Array.of(1, 1, 1, 1), 2)).toBe(false);
		expect(invertPositiveDefinite(Float64Array.of(0, 0, 0, 1), 2)).toBe(false);
	});
});
