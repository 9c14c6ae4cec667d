import { invertPositiveDefinite } from '#shared/geometry/cholesky.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { designRows } from './design-rows.ts';
import { observationsOf } from './fit-observations.ts';
import type { FitInput } from './fit-schema.ts';
import { fitUnknowns, leastPairs } from './least-pairs.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';
import { solveFit } from './solve-fit.ts';

/**
 * What holding one pair back would cost.
 * @param beforeM the fit's point error, 2·√(σ²E + σ²N + σ²H), at its worst place, metres; with no σ scaled by the σ̂₀ that the fit has now
 * @param afterM the same without the pair
 */
export interface LeastNeeded {
	name: string;
	beforeM: number;
	afterM: number;
}

/**
 * The pair that the fit can best do without, to be held back as an independent check: without it the fit's point error at the worst of the
 * places grows least. By what it costs where the fit will be used and not by leverage alone, which would take a pair at the edge for needed
 * though nothing is checked there. Q without a pair is the inverse of N − Aᵢᵀ·Σᵢ⁻¹·Aᵢ; the pose is left where it is, which is exact to the
 * order of residual over span.
 *
 * Null where no pair can be spared: the others must determine the fit with one pair over.
 * @param places where the fit will be used, control frame, metres
 * @param isEligible names that may be chosen; a pair that is accused checks nothing
 */
export function leastNeededPair(input: FitInput, places: readonly Vector3[], isEligible: (name: string) => boolean): LeastNeeded | null {
	const inFit = input.pairs.filter(({ heldBack }) => !heldBack);
	if (inFit.length < leastPairs(input.fit) + 2 || places.length === 0) return null;
	const observations = observationsOf(input, inFit);
	const solution = solveFit(observations);
	if (!solution.ok) return null;
	const { equations, pose } = solution.adjustment;
	const unknowns = fitUnknowns(input.fit);
	const size = unknowns.length;
	const redundancy = observations.known.reduce((sum, known) => sum + (known & 1 ? 2 : 0) + (known & 2 ? 1 : 0), -size);
	const factor = observations.sigmaGiven ? 1 : equations.objective / Math.max(redundancy, 1);
	const seen = places.map((place) =>
		designRows(...([0, 1, 2].map((k) => place[k]! - observations.controlOrigin[k]! - pose.shift[k]!) as [number, number, number])),
	);
	const normal = Float64Array.from({ length: size * size }, (_, at) => {
		return equations.normal[7 * unknowns[Math.floor(at / size)]! + unknowns[at % size]!]!;
	});
	/** 2·√ of the largest trace of J·Q·Jᵀ over the places; null where Q does not exist. */
	const pointErrorM = (matrix: Float64Array): number | null => {
		const cofactor = matrix.slice();
		if (!invertPositiveDefinite(cofactor, size)) return null;
		let worst = 0;
		for (const rows of seen) {
			let trace = 0;
			for (const k of axesOf(input)) {
				for (let p = 0; p < size; p++) {
					for (let q = 0; q < size; q++) trace += rows[7 * k + unknowns[p]!]! * cofactor[p * size + q]! * rows[7 * k + unknowns[q]!]!;
				}
			}
			worst = Math.max(worst, trace);
		}
		return 2 * Math.sqrt(factor * worst);
	};
	const beforeM = pointErrorM(normal);
	if (beforeM === null) return null;
	const { groupOf } = sigmaGroupsOf(observations);
	let best: LeastNeeded | null = null;
	inFit.forEach(({ name }, i) => {
		if (!isEligible(name)) return;
		const rows = designRows(equations.adjusted[3 * i]!, equations.adjusted[3 * i + 1]!, equations.adjusted[3 * i + 2]!);
		const weight = symmetric(equations.inverse, 6 * groupOf[i]!);
		const without = normal.map((value, at) => {
			const [p, q] = [unknowns[Math.floor(at / size)]!, unknowns[at % size]!];
			let own = 0;
			for (let k = 0; k < 3; k++) for (let l = 0; l < 3; l++) own += rows[7 * k + p]! * weight[3 * k + l]! * rows[7 * l + q]!;
			return value - own;
		});
		const afterM = pointErrorM(without);
		if (afterM !== null && (best === null || afterM < best.afterM)) best = { name, beforeM, afterM };
	});
	return best;
}

/** A height fit says nothing of plan. */
function axesOf({ fit }: FitInput): readonly number[] {
	return fit === 'height' ? [2] : [0, 1, 2];
}

/** xx, xy, xz, yy, yz, zz from `at` on as nine numbers, row by row. */
function symmetric(six: Float64Array, at: number): number[] {
	return [0, 1, 2, 1, 3, 4, 2, 4, 5].map((place) => six[at + place]!);
}
