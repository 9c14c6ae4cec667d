import { describe, expect, it } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import { readFitInput } from '#shared/fit/read-fit-input.ts';
import published from './published-fits.json' with { type: 'json' };
import reference from './reference-fits.json' with { type: 'json' };

/** Numbers computed elsewhere: in 96-digit arithmetic, and printed in publications. The sources stand in the data. */

interface Expected {
	scale: number;
	rotation: number[][];
	translation: number[];
	rms: number;
	redundancy: number;
	varianceFactor?: number;
	chiSquare?: { statistic: number; lower: number; upper: number; passes: boolean } | null;
	pairs?: {
		name: string;
		residual: number[];
		redundancy?: number;
		normalised?: number | null;
		critical?: number;
		smallestBlunder?: number | null;
		leaveOneOut?: number[] | null;
	}[];
	carried?: { name: string; point: number[]; covariance?: number[][] }[];
}

interface Case {
	name: string;
	input: unknown;
	expect: Expected;
	tolerance: Record<string, number>;
	published?: { scale?: number; translation?: number[] };
}

const cases = [...reference.cases, ...published.cases] as unknown as Case[];

function near(got: readonly (number | null)[] | null | undefined, want: readonly number[], tolerance: number): void {
	expect(got).toHaveLength(want.length);
	want.forEach((value, k) => {
		expect(Math.abs(got![k]! - value)).toBeLessThanOrEqual(tolerance);
	});
}

describe('reference fits', () => {
	it.each(cases)('$name', ({ input, expect: want, tolerance, published: printed }) => {
		const read = readFitInput(input);
		if (!read.ok) throw new Error(read.refusal.message);
		const outcome = computeFit(read.input, { findings: false });
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		const { result } = outcome;
		near([result.scale], [want.scale], tolerance.scale!);
		want.rotation.forEach((row, k) => {
			near(result.rotation[k], row, tolerance.rotation!);
		});
		near(result.translation, want.translation, tolerance.translation!);
		near([result.rms], [want.rms], tolerance.rms!);
		expect(result.redundancy).toBe(want.redundancy);
		if (want.varianceFactor !== undefined) near([result.varianceFactor], [want.varianceFactor], 1e-5 * want.varianceFactor + 1e-15);
		if (want.chiSquare) {
			near([result.chiSquare!.statistic], [want.chiSquare.statistic], 1e-5 * want.chiSquare.statistic);
			near([result.chiSquare!.lower, result.chiSquare!.upper], [want.chiSquare.lower, want.chiSquare.upper], 1e-6 * want.chiSquare.upper);
			expect(result.chiSquare!.passes).toBe(want.chiSquare.passes);
		}
		for (const pair of want.pairs ?? []) {
			const got = result.pairs.find(({ name }) => name === pair.name)!;
			near(got.residual, pair.residual, tolerance.residual!);
			if (pair.redundancy !== undefined) near([got.redundancy], [pair.redundancy], 1e-6);
			if (typeof pair.normalised === 'number') near([got.normalised], [pair.normalised], 1e-4);
			if (pair.critical !== undefined) near([got.critical], [pair.critical], 1e-3);
			if (typeof pair.smallestBlunder === 'number') near([got.smallestBlunder], [pair.smallestBlunder], 1e-3 * pair.smallestBlunder);
			if (pair.leaveOneOut) near(got.leaveOneOut, pair.leaveOneOut, tolerance.leaveOneOut!);
			else if (pair.leaveOneOut === null) expect(got.leaveOneOut).toBeNull();
		}
		for (const point of want.carried ?? []) {
			const got = result.carried.find(({ name }) => name === point.name)!;
			near(got.point, point.point, tolerance.point!);
			const trace = point.covariance ? point.covariance.reduce((sum, row, k) => sum + row[k]!, 0) : 0;
			point.covariance?.forEach((row, k) => {
				near(got.covariance?.[k], row, 1e-5 * trace);
			});
		}
		if (printed?.scale !== undefined)
			expect(Math.abs(result.scale - printed.scale)).toBeLessThan(10 ** -String(printed.scale).split('.')[1]!.length);
		if (printed?.translation) near(result.translation.slice(0, printed.translation.length), printed.translation, 1e-3);
	});
});
