import type { Adjustment } from './adjust.ts';
import { designRows } from './design-rows.ts';
import type { FitObservations } from './fit-observations.ts';
import { fullCofactor } from './pair-reliability.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';

/**
 * @param values the parameters' estimates
 * @param covariance their covariance, row by row (with no σ: for unit weight)
 * @param drop by how much F falls once they are unknowns of the fit; chi-square with as many degrees where they are truly zero
 */
export interface AddedParameters {
	values: number[];
	covariance: number[][];
	drop: number;
}

/**
 * What one or two more unknowns would explain of the residuals, to first order: control − fitted ≈ Σ column·value (additional parameters,
 * tested as in Baarda 1968). Null where the pairs do not determine them beside the fit's own unknowns.
 * @param columns each 3·count numbers, control frame: ∂(control − fitted)/∂parameter
 */
export function addParameters(
	observations: FitObservations,
	adjustment: Adjustment,
	columns: readonly Float64Array[],
): AddedParameters | null {
	const { equations } = adjustment;
	const { groupOf } = sigmaGroupsOf(observations);
	const cofactor = fullCofactor(adjustment, observations);
	const size = columns.length;
	const gain = columns.map(() => 0);
	const square = columns.map(() => columns.map(() => 0));
	const mixed = columns.map(() => new Float64Array(7));
	for (let i = 0; i < observations.count; i++) {
		const rows = designRows(equations.adjusted[3 * i]!, equations.adjusted[3 * i + 1]!, equations.adjusted[3 * i + 2]!);
		columns.forEach((column, a) => {
			const weighted = weigh(equations.inverse, 6 * groupOf[i]!, column, i);
			for (let k = 0; k < 3; k++) {
				gain[a]! += weighted[k]! * equations.residual[3 * i + k]!;
				for (let p = 0; p < 7; p++) mixed[a]![p]! += rows[7 * k + p]! * weighted[k]!;
				columns.forEach((other, b) => {
					square[a]![b]! += weighted[k]! * other[3 * i + k]!;
				});
			}
		});
	}
	// Schur complement: what is left of the columns once the fit's own unknowns have taken their share.
	const left = square.map((row, a) => row.map((value, b) => value - quadratic(mixed[a]!, cofactor, mixed[b]!)));
	if (left.some((row, a) => !(row[a]! > 1e-9 * square[a]![a]!))) return null;
	if (size === 1) {
		const value = gain[0]! / left[0]![0]!;
		return { values: [value], covariance: [[1 / left[0]![0]!]], drop: gain[0]! * value };
	}
	const determinant = left[0]![0]! * left[1]![1]! - left[0]![1]! * left[1]![0]!;
	if (!(determinant > 1e-6 * left[0]![0]! * left[1]![1]!)) return null;
	const covariance = [
		[left[1]![1]! / determinant, -left[0]![1]! / determinant],
		[-left[0]![1]! / determinant, left[0]![0]! / determinant],
	];
	const values = covariance.map((row) => row[0]! * gain[0]! + row[1]! * gain[1]!);
	return { values, covariance, drop: values[0]! * gain[0]! + values[1]! * gain[1]! };
}

function weigh(inverse: Float64Array, at: number, column: Float64Array, i: number): [number, number, number] {
	const x = column[3 * i]!;
	const y = column[3 * i + 1]!;
	const z = column[3 * i + 2]!;
	return [
		inverse[at]! * x + inverse[at + 1]! * y + inverse[at + 2]! * z,
		inverse[at + 1]! * x + inverse[at + 3]! * y + inverse[at + 4]! * z,
		inverse[at + 2]! * x + inverse[at + 4]! * y + inverse[at + 5]! * z,
	];
}

function quadratic(a: Float64Array, matrix: Float64Array, b: Float64Array): number {
	let sum = 0;
	for (let p = 0; p < 7; p++) for (let q = 0; q < 7; q++) sum += a[p]! * matrix[7 * p + q]! * b[q]!;
	return sum;
}
