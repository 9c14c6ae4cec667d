import type { SizeName } from '../tolerance/limit.ts';
import { matchPreparedRule, prepareRules, type RuleSubject } from '../tolerance/match-rule.ts';
import type { DecisionRule, ToleranceSheet } from '../tolerance/sheet-schema.ts';
import type { Deviation, Verdict } from './check-schema.ts';
import { checkpointLimits } from './judge-deviation.ts';
import { rejudge } from './rejudge.ts';

/** A checkpoint as a sheet is held against it, and what was last measured there; null where nothing was. */
export interface WeighedCheckpoint {
	readonly checkpointId: string;
	readonly mark: string;
	readonly label: string;
	readonly subject: Omit<RuleSubject, 'stage'>;
	readonly deviation: Deviation | null;
	readonly stage: RuleSubject['stage'];
}

/** "C/3 +16, was ±10, now ±20": a verdict that another sheet would change. Millimetres. */
export interface ChangedVerdict {
	readonly checkpointId: string;
	readonly mark: string;
	readonly label: string;
	readonly characteristic: Deviation['characteristic'];
	readonly deviationMm: number;
	readonly wasMm: readonly [number | null, number | null] | null;
	readonly isMm: readonly [number | null, number | null] | null;
	readonly was: Verdict;
	readonly is: Verdict;
}

/** A rule that sets no limit where it decides: the lower limit came out above the upper one, or a size is missing. */
export interface RuleFault {
	readonly ruleIndex: number;
	readonly mark: string;
	readonly fault: 'crossed' | SizeName;
}

export interface WeighedSheet {
	/** How many checkpoints each rule decides, in the sheet's order. */
	readonly decides: readonly number[];
	/** Those that no rule decides. */
	readonly undecided: readonly WeighedCheckpoint[];
	readonly changes: readonly ChangedVerdict[];
	/** One for each rule and kind of fault, with the first element it shows at. */
	readonly faults: readonly RuleFault[];
}

/** What a sheet would decide, and which verdicts it would change from those that are kept. Pure: the same figures, other limits. */
export function weighSheet(sheet: ToleranceSheet, checkpoints: readonly WeighedCheckpoint[], gridYawRad: number): WeighedSheet {
	const rules = prepareRules(sheet.rules);
	const indexOf = new Map(sheet.rules.map((rule, index) => [rule, index]));
	const decides = sheet.rules.map(() => 0);
	const undecided: WeighedCheckpoint[] = [];
	const changes: ChangedVerdict[] = [];
	const faults = new Map<string, RuleFault>();
	for (const checkpoint of checkpoints) {
		const matched = matchPreparedRule(rules, { ...checkpoint.subject, stage: checkpoint.stage });
		const isPlan = checkpoint.subject.characteristic === 'plan';
		const limits = checkpointLimits(matched, checkpoint.subject.sizesM, isPlan, (axes) => (axes === 'grid' ? gridYawRad : 0));
		const index = matched.rule === null ? undefined : indexOf.get(matched.rule);
		if (index === undefined) undecided.push(checkpoint);
		else decides[index]! += 1;
		if (limits.fault !== null && index !== undefined) {
			const fault = 'crossed' in limits.fault ? 'crossed' : limits.fault.missingSize;
			const key = `${index} ${fault}`;
			if (!faults.has(key)) faults.set(key, { ruleIndex: index, mark: checkpoint.mark, fault });
		}
		const changed = changeOf(checkpoint, limits.limitsMm, limits.boxYawRad, sheet.decision);
		if (changed !== null) changes.push(changed);
	}
	return {
		decides,
		undecided,
		changes,
		faults: [...faults.values()],
	};
}

function changeOf(
	{ checkpointId, mark, label, deviation }: WeighedCheckpoint,
	limitsMm: Deviation['limitsMm'],
	boxYawRad: number | null,
	decision: DecisionRule,
): ChangedVerdict | null {
	if (deviation === null || deviation.deviationMm === null) return null;
	const { verdict } = rejudge({ ...deviation, limitsMm, boxYawRad }, decision);
	if (verdict === deviation.verdict) return null;
	return {
		checkpointId,
		mark,
		label,
		characteristic: deviation.characteristic,
		deviationMm: deviation.deviationMm,
		wasMm: deviation.limitsMm,
		isMm: limitsMm,
		was: deviation.verdict,
		is: verdict,
	};
}

/** Two numbers as limits of one rule where the lower is above the upper: seen without any element. In the sheet's order. */
export function crossedRules(sheet: ToleranceSheet): number[] {
	return sheet.rules.flatMap(({ lowerMm, upperMm }, index) =>
		typeof lowerMm === 'number' && typeof upperMm === 'number' && lowerMm > upperMm ? [index] : [],
	);
}
