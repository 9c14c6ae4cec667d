import { normalBetween } from '../geometry/error-function.ts';
import { sigmaAlong } from '../geometry/plan-covariance.ts';
import type { Verdict } from './check-schema.ts';
import type { BoxJudgement, DiscJudgement, Judgement, LineJudgement } from './judge-schema.ts';
import { probabilityInBox, probabilityInDisc, turnPlan } from './plan-conformity.ts';

/** Φ(2): what *within* also asks in plan, where a deviation has more than one way out. */
export const planConformityLeast = 0.9772498680518208;

export interface JudgedVerdict {
	readonly verdict: Verdict;
	/** The probability that the true value lies inside the limits; null where the uncertainty is not known. */
	readonly conformity: number | null;
}

type Limits = readonly [number | null, number | null];

/**
 * What rounding may add to a sum of three doubles: a value that meets a closed limit in decimals (0.1 + 2·0.1 against 0.3) meets it here too.
 * Never more than a billionth of u, so that nothing is decided by it that the measurement could tell.
 */
function roundingMm(deviationMm: number, standardUncertaintyMm: number, limitMm: number): number {
	const largest = Math.max(Math.abs(deviationMm), 2 * standardUncertaintyMm, Math.abs(limitMm));
	return Math.min(4 * Number.EPSILON * largest, 1e-9 * standardUncertaintyMm);
}

/** within: all of d ± 2u inside the closed limits. outside: all of it beyond one limit. Else too close to call. */
function guardedVerdict(deviationMm: number, standardUncertaintyMm: number, [lowerMm, upperMm]: Limits): Verdict {
	const expandedMm = 2 * standardUncertaintyMm;
	const slackTo = (limitMm: number): number => roundingMm(deviationMm, standardUncertaintyMm, limitMm);
	if (upperMm !== null && deviationMm - expandedMm > upperMm + slackTo(upperMm)) return 'outside';
	if (lowerMm !== null && deviationMm + expandedMm < lowerMm - slackTo(lowerMm)) return 'outside';
	const isInside =
		(upperMm === null || deviationMm + expandedMm <= upperMm + slackTo(upperMm)) &&
		(lowerMm === null || deviationMm - expandedMm >= lowerMm - slackTo(lowerMm));
	return isInside ? 'within' : 'too-close-to-call';
}

function isInsideLimits(deviationMm: number, [lowerMm, upperMm]: Limits): boolean {
	return (lowerMm === null || deviationMm >= lowerMm) && (upperMm === null || deviationMm <= upperMm);
}

/** (limit − d)/u without overflow on the way. */
function standardised(limitMm: number, deviationMm: number, standardUncertaintyMm: number): number {
	const distanceMm = limitMm - deviationMm;
	return Number.isFinite(distanceMm) ? distanceMm / standardUncertaintyMm : (limitMm / 2 - deviationMm / 2) / (standardUncertaintyMm / 2);
}

/** P(lower ≤ true value ≤ upper) for a normal value about d with u: JCGM 106:2012, 7.2 to 7.4. */
function lineConformity(deviationMm: number, standardUncertaintyMm: number, limitsMm: Limits): number {
	if (standardUncertaintyMm === 0) return isInsideLimits(deviationMm, limitsMm) ? 1 : 0;
	const [lowerMm, upperMm] = limitsMm;
	return normalBetween(
		lowerMm === null ? Number.NEGATIVE_INFINITY : standardised(lowerMm, deviationMm, standardUncertaintyMm),
		upperMm === null ? Number.POSITIVE_INFINITY : standardised(upperMm, deviationMm, standardUncertaintyMm),
	);
}

function judgeLine({ deviationMm, standardUncertaintyMm, limitsMm, decision }: LineJudgement): JudgedVerdict {
	const conformity = standardUncertaintyMm === null ? null : lineConformity(deviationMm, standardUncertaintyMm, limitsMm);
	if (decision === 'simple') return { verdict: isInsideLimits(deviationMm, limitsMm) ? 'within' : 'outside', conformity };
	if (standardUncertaintyMm === null) return { verdict: 'undecided', conformity };
	return { verdict: guardedVerdict(deviationMm, standardUncertaintyMm, limitsMm), conformity };
}

/** In plan *within* also asks a conformity of Φ(2); 1e-9 is less than the quadrature is good for, and keeps a certain value on the limit in. */
function withPlanConformity(verdict: Verdict, conformity: number): Verdict {
	return verdict === 'within' && conformity < planConformityLeast - 1e-9 ? 'too-close-to-call' : verdict;
}

/** √(e² + n²): exact where the squares are, as for 3, 4, 5; without overflow elsewhere. */
export function planDistance([east, north]: readonly [number, number]): number {
	const square = east * east + north * north;
	return square > 1e-200 && square < 1e300 ? Math.sqrt(square) : Math.hypot(east, north);
}

function judgeDisc({ offsetMm, covarianceMm2, radiusMm, decision }: DiscJudgement): JudgedVerdict {
	const lengthMm = planDistance(offsetMm);
	// A mark on the circle in decimals is on it, whatever squares and root were rounded by.
	const distanceMm = Math.abs(lengthMm - radiusMm) <= 2 * Number.EPSILON * radiusMm ? radiusMm : lengthMm;
	const conformity = covarianceMm2 === null ? null : probabilityInDisc(offsetMm, covarianceMm2, radiusMm);
	if (decision === 'simple') {
		return { verdict: distanceMm <= radiusMm ? 'within' : 'outside', conformity };
	}
	if (covarianceMm2 === null || conformity === null) return { verdict: 'undecided', conformity: null };
	const verdict = guardedVerdict(distanceMm, sigmaAlong(covarianceMm2, offsetMm), [null, radiusMm]);
	return { verdict: withPlanConformity(verdict, conformity), conformity };
}

/** A box is judged along each of its axes: outside where one axis is, within where both are and the whole conforms at Φ(2). */
function judgeBox({ offsetMm, covarianceMm2, limitsMm, boxYawRad, decision }: BoxJudgement): JudgedVerdict {
	const turned = turnPlan(
		offsetMm,
		covarianceMm2 ?? [
			[0, 0],
			[0, 0],
		],
		boxYawRad,
	);
	const conformity =
		covarianceMm2 === null
			? null
			: probabilityInBox(offsetMm, covarianceMm2, { lower: limitsMm[0], upper: limitsMm[1], yawRad: boxYawRad });
	if (decision === 'simple') {
		return { verdict: turned.mean.every((alongMm) => isInsideLimits(alongMm, limitsMm)) ? 'within' : 'outside', conformity };
	}
	if (conformity === null) return { verdict: 'undecided', conformity };
	const verdicts = [0, 1].map((axis) =>
		guardedVerdict(turned.mean[axis]!, Math.sqrt(Math.max(0, turned.covariance[axis]![axis]!)), limitsMm),
	);
	if (verdicts.includes('outside')) return { verdict: 'outside', conformity };
	return { verdict: withPlanConformity(verdicts.includes('too-close-to-call') ? 'too-close-to-call' : 'within', conformity), conformity };
}

/**
 * The verdict on one deviation and its probability of conformity. Every figure the product shows passes through here.
 *
 * Units   millimetres; deviations signed, + proud or high; in plan as-built less design, east and north.
 * Rule    guarded: closed limits, U = 2u: within, outside or too close to call; undecided where u is not known. simple: within or outside by the
 *         deviation alone (shared risk). In plan d is the length of the offset and u is taken along it.
 * Source  JCGM 106:2012 (conformity, clause 7; guarded acceptance, clause 8), ISO 14253-1:2017 with k = 2.
 * Exact   conformity to 1e-14 along a line, 1e-10 in plan (tests/check/verdict.test.ts).
 */
export function judge(input: Judgement): JudgedVerdict {
	if ('radiusMm' in input) return judgeDisc(input);
	if ('boxYawRad' in input) return judgeBox(input);
	return judgeLine(input);
}
