import { type ElementSizesM, sizeInMm } from './limit.ts';
import type { RuleMatch, Stage, ToleranceRule } from './sheet-schema.ts';

/** What a rule is held against: one checkpoint (or one result derived from several) of one element. */
export interface RuleSubject {
	readonly class: string;
	readonly characteristic: NonNullable<RuleMatch['characteristic']>;
	readonly storey: string;
	readonly building?: string | null;
	readonly tag: string;
	readonly mark: string;
	readonly stage: Stage;
	/** null: not known, and then no rule that asks for it fits. */
	readonly exposed?: boolean | null;
	readonly sizesM: ElementSizesM;
}

export interface MatchedRule {
	readonly rule: ToleranceRule | null;
	/** Rules that would have come first but ask for a size the element has not. */
	readonly withoutSize: readonly ToleranceRule[];
}

/** Names are compared whole, without regard to case and to blanks about them; there are no wildcards. */
function comparable(name: string | null | undefined): string {
	return (name ?? '').trim().toLowerCase();
}

const named = ['class', 'storey', 'building', 'tag', 'mark'] as const;

/** A rule with its names made ready to compare, so that a sheet of 500 rules against thousands of elements lower-cases each name once. */
export interface PreparedRule {
	readonly rule: ToleranceRule;
	readonly wanted: readonly (readonly [(typeof named)[number], string])[];
}

/** Makes a sheet's rules ready for `matchPreparedRule`, in their order. */
export function prepareRules(rules: readonly ToleranceRule[]): PreparedRule[] {
	return rules.map((rule) => ({
		rule,
		wanted: named.flatMap((name) => (rule.match[name] === undefined ? [] : [[name, comparable(rule.match[name])] as const])),
	}));
}

/** Over the first, up to and with the second. Without `of` the length is meant. */
function fitsSize(match: RuleMatch, sizesM: ElementSizesM): boolean | 'unknown' {
	if (match.sizeMm === undefined) return true;
	const sizeMm = sizeInMm(sizesM, match.of ?? 'length');
	if (sizeMm === null) return 'unknown';
	return sizeMm > match.sizeMm[0] && sizeMm <= match.sizeMm[1];
}

/** The first of the prepared rules that fits decides; null where none does. */
export function matchPreparedRule(rules: readonly PreparedRule[], subject: RuleSubject): MatchedRule {
	const found = Object.fromEntries(named.map((name) => [name, comparable(subject[name])])) as Record<(typeof named)[number], string>;
	const withoutSize: ToleranceRule[] = [];
	for (const { rule, wanted } of rules) {
		const { match } = rule;
		if (match.characteristic !== undefined && match.characteristic !== subject.characteristic) continue;
		if (match.stage !== undefined && match.stage !== subject.stage) continue;
		if (match.exposed !== undefined && match.exposed !== subject.exposed) continue;
		if (!wanted.every(([name, value]) => value === found[name])) continue;
		const fits = fitsSize(match, subject.sizesM);
		if (fits === true) return { rule, withoutSize };
		if (fits === 'unknown') withoutSize.push(rule);
	}
	return { rule: null, withoutSize };
}

/** The first rule of the sheet that fits decides; null where none does. */
export function matchRule(rules: readonly ToleranceRule[], subject: RuleSubject): MatchedRule {
	return matchPreparedRule(prepareRules(rules), subject);
}
