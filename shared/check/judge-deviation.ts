import { evaluateLimits, type SizeName } from '../tolerance/limit.ts';
import type { MatchedRule } from '../tolerance/match-rule.ts';
import type { DecisionRule, ToleranceRule } from '../tolerance/sheet-schema.ts';
import type { Deviation } from './check-schema.ts';
import type { Judgement } from './judge-schema.ts';
import type { MeasuredDeviation } from './measure-deviation.ts';
import { turnPlan } from './plan-conformity.ts';
import { judge } from './verdict.ts';

export type LimitFault = { readonly rule: ToleranceRule } & ({ readonly missingSize: SizeName } | { readonly crossed: true });

/** The limits that one rule sets for one checkpoint, millimetres; none where no rule fits, it sets no limit, or cannot be evaluated. */
export interface CheckpointLimits {
	readonly rule: ToleranceRule | null;
	readonly limitsMm: [number | null, number | null] | null;
	readonly boxYawRad: number | null;
	readonly fault: LimitFault | null;
}

/** Evaluates the rule that was found. `axisYawRad` is that of the axes the rule names. */
export function checkpointLimits(
	{ rule }: MatchedRule,
	sizesM: Parameters<typeof evaluateLimits>[1],
	isPlan: boolean,
	axisYawRad: (axes: NonNullable<ToleranceRule['axes']>) => number,
): CheckpointLimits {
	const none = { limitsMm: null, boxYawRad: null };
	if (rule === null) return { rule, ...none, fault: null };
	const evaluated = evaluateLimits(rule, sizesM, isPlan);
	if ('missingSize' in evaluated) return { rule, ...none, fault: { rule, missingSize: evaluated.missingSize } };
	if ('crossed' in evaluated) return { rule, ...none, fault: { rule, crossed: true } };
	const [lower, upper] = evaluated.limitsMm;
	if (lower === null && upper === null) return { rule, ...none, fault: null };
	return {
		rule,
		limitsMm: [lower, upper],
		boxYawRad: isPlan && rule.shape === 'box' ? axisYawRad(rule.axes ?? 'grid') : null,
		fault: null,
	};
}

/** What `judge` is asked for a measured deviation and its limits. */
export function judgementOf(
	measured: Pick<MeasuredDeviation, 'deviationMm' | 'offsetMm' | 'covarianceMm2' | 'expandedUncertaintyMm'>,
	limitsMm: [number | null, number | null],
	boxYawRad: number | null,
	decision: DecisionRule,
): Judgement {
	if (measured.offsetMm === null) {
		const standardUncertaintyMm = measured.expandedUncertaintyMm === null ? null : measured.expandedUncertaintyMm / 2;
		return { deviationMm: measured.deviationMm, standardUncertaintyMm, limitsMm, decision };
	}
	const plan = { characteristic: 'plan' as const, offsetMm: measured.offsetMm, covarianceMm2: measured.covarianceMm2, decision };
	return boxYawRad === null ? { ...plan, radiusMm: limitsMm[1] ?? Number.MAX_VALUE } : { ...plan, limitsMm, boxYawRad };
}

/** How far the nearest exceeded limit lies behind the value, millimetres; of a box the worse of its axes. */
export function beyondLimitsMm(
	measured: Pick<MeasuredDeviation, 'deviationMm' | 'offsetMm'>,
	[lower, upper]: [number | null, number | null],
	boxYawRad: number | null,
): number {
	const values =
		measured.offsetMm !== null && boxYawRad !== null
			? turnPlan(
					measured.offsetMm,
					[
						[0, 0],
						[0, 0],
					],
					boxYawRad,
				).mean
			: [measured.deviationMm];
	return Math.max(0, ...values.map((value) => Math.max(upper === null ? 0 : value - upper, lower === null ? 0 : lower - value)));
}

/** Verdict, conformity and excess of one checkpoint. */
export function judgeDeviation(
	measured: Pick<MeasuredDeviation, 'deviationMm' | 'offsetMm' | 'covarianceMm2' | 'expandedUncertaintyMm'> | null,
	{ limitsMm, boxYawRad }: Pick<CheckpointLimits, 'limitsMm' | 'boxYawRad'>,
	decision: DecisionRule,
): Pick<Deviation, 'verdict' | 'conformity' | 'beyondMm'> {
	if (measured === null) return { verdict: 'not-measured', conformity: null, beyondMm: null };
	if (limitsMm === null) return { verdict: 'no-tolerance', conformity: null, beyondMm: null };
	const { verdict, conformity } = judge(judgementOf(measured, limitsMm, boxYawRad, decision));
	return { verdict, conformity, beyondMm: verdict === 'outside' ? beyondLimitsMm(measured, limitsMm, boxYawRad) : null };
}
