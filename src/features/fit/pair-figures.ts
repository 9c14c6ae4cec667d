import { carriedPointCovariance, carryPoint, fitCovarianceAt } from '#shared/fit/carry-point.ts';
import type { PairsOfSetup } from '#shared/fit/contract.ts';
import type { FitPair, FitPairResult, FitResult } from '#shared/fit/fit-schema.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';

export const axisNames = ['East', 'North', 'Level'] as const;
export type Axis = 0 | 1 | 2;

/** A pair as the table shows it. Millimetres, along the control frame's axes: where the fit puts the target, from its mark. */
export interface PairFigures {
	name: string;
	/** Null along an axis that is not known, and where there is no fit. Of a pair that is not in the fit: what it would show. */
	residualMm: [number | null, number | null, number | null];
	/** What each residual is held against, ± mm; null where no σ is known. */
	boundMm: [number | null, number | null, number | null];
	/** The misfit against the fit of all others; null where that fit is not possible. */
	leftOutMm: [number | null, number | null, number | null] | null;
	isBeyond: boolean;
	/** The axis with the largest share of its bound, else with the largest residual. */
	worstAxis: Axis;
}

/** The critical value for a held-back pair's misfit over its σ (α₀ = 0.1 %: Baarda 1968). */
const heldBackCritical = 3.29;

/**
 * The figures of every pair against a fit: those in it, those held back, and what the set-aside ones would show.
 *
 * @param fit null where there is none: every figure is null
 */
export function pairFigures(pairs: PairsOfSetup['pairs'], fit: FitResult | null): Map<string, PairFigures> {
	const results = new Map(fit?.pairs.map((result) => [result.name, result]));
	return new Map(pairs.map((pair) => [pair.name, figuresOf(pair, results.get(pair.name) ?? null, fit)]));
}

function figuresOf(pair: FitPair, result: FitPairResult | null, fit: FitResult | null): PairFigures {
	const residualMm = (result?.residual ?? residualAside(pair, fit)).map((value) =>
		value === null ? null : value * 1000,
	) as PairFigures['residualMm'];
	const boundMm = result && fit ? boundsMm(pair, result, fit) : ([null, null, null] as PairFigures['boundMm']);
	const shares = ([0, 1, 2] as const).map((axis) => {
		const residual = Math.abs(residualMm[axis] ?? 0);
		const bound = boundMm[axis];
		return bound === null || bound === 0 ? residual / 1e6 : residual / bound;
	});
	const worstAxis = shares.indexOf(Math.max(...shares)) as Axis;
	return {
		name: pair.name,
		residualMm,
		boundMm,
		leftOutMm:
			(result?.leaveOneOut?.map((value) => (value === null ? null : value * 1000)) as PairFigures['residualMm'] | undefined) ?? null,
		isBeyond: isBeyondCritical(result),
		worstAxis,
	};
}

/** Where the fit would put a pair that it does not use, from its mark; metres. */
function residualAside({ survey, control }: FitPair, fit: FitResult | null): [number | null, number | null, number | null] {
	const [x, y, z] = survey;
	if (fit === null || z === null) return [null, null, null];
	const isPlanKnown = fit.fit !== 'height' && x !== null && y !== null;
	const carried = carryPoint(fit, [x ?? fit.origin[0], y ?? fit.origin[1], z]);
	const along = (axis: Axis) => (control[axis] === null || (axis < 2 && !isPlanKnown) ? null : carried[axis] - control[axis]);
	return [along(0), along(1), along(2)];
}

function isBeyondCritical(result: FitPairResult | null): boolean {
	return result !== null && result.normalised !== null && result.critical !== null && result.normalised > result.critical;
}

/** ± critical · σ_v along each axis: σ_v² = Σ − A·Q·Aᵀ in the fit, Σ + J·Q·Jᵀ held back. */
function boundsMm(pair: FitPair, result: FitPairResult, fit: FitResult): PairFigures['boundMm'] {
	const { controlSigma, surveySigma } = pair;
	const [x, y, z] = pair.survey;
	if (!controlSigma || !surveySigma || z === null || result.critical === null) return [null, null, null];
	const surveyPoint: Vector3 = [x ?? fit.origin[0], y ?? fit.origin[1], z];
	const point = carriedPointCovariance(fit, surveySigma);
	const carried = fitCovarianceAt(fit, surveyPoint);
	const critical = result.heldBack ? heldBackCritical : result.critical;
	return ([0, 1, 2] as const).map((axis) => {
		if (result.residual[axis] === null) return null;
		const own = controlSigma[axis] ** 2 + point[axis][axis];
		const variance = result.heldBack ? own + carried[axis][axis] : own - carried[axis][axis];
		// An axis with next to no redundancy proves nothing and has no bound.
		return variance > 1e-9 * own ? 1000 * critical * Math.sqrt(variance) : null;
	}) as PairFigures['boundMm'];
}

/** The sentence of a pair: "T7: 95.4 mm low; chance allows ±6.1." */
export function pairSentence({ name, residualMm, boundMm, worstAxis }: PairFigures): string {
	const value = residualMm[worstAxis];
	if (value === null) return `${name}: no misfit is known.`;
	const bound = boundMm[worstAxis];
	return `${name}: ${Math.abs(value).toFixed(1)} mm ${directionWord(worstAxis, value)}${bound === null ? '' : `; chance allows ±${bound.toFixed(1)}`}.`;
}

/** "east", "west", "north", "south", "high", "low" of a signed value along an axis. */
export function directionWord(axis: Axis, value: number): string {
	return (
		[
			['east', 'west'],
			['north', 'south'],
			['high', 'low'],
		] as const
	)[axis][value >= 0 ? 0 : 1];
}
