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
function isSameName(wanted: string | undefined, found: string | null | undefined): boolean {
	return wanted === undefined || wanted.trim().toLowerCase() === (found ?? '').trim().toLowerCase();
}

/** Over the first, up to and with the second. Without `of` the length is meant. */
function fitsSize(match: RuleMatch, sizesM: ElementSizesM): boolean | 'unknown' {
	if (match.sizeMm === undefined) return true;
	const sizeMm = sizeInMm(sizesM, match.of ?? 'length');
	if (sizeMm === null) return 'unknown';
	return sizeMm > match.sizeMm[0] && sizeMm <= match.sizeMm[1];
}

function fitsAllButSize(match: RuleMatch, subject: RuleSubject): boolean {
	return (
		isSameName(match.class, subject.class) &&
		(match.characteristic === undefined || match.characteristic === subject.characteristic) &&
		isSameName(match.storey, subject.storey) &&
		isSameName(match.building, subject.building) &&
		isSameName(match.tag, subject.tag) &&
		isSameName(match.mark, subject.mark) &&
		(match.stage === undefined || match.stage === subject.stage) &&
		(match.exposed === undefined || match.exposed === subject.exposed)
	);
}

/** The first rule of the sheet that fits decides; null where none does. */
export function matchRule(rules: readonly ToleranceRule[], subject: RuleSubject): MatchedRule {
	const withoutSize: ToleranceRule[] = [];
	for (const rule of rules) {
		if (!fitsAllButSize(rule.match, subject)) continue;
		const fits = fitsSize(rule.match, subject.sizesM);
		if (fits === true) return { rule, withoutSize };
		if (fits === 'unknown') withoutSize.push(rule);
	}
	return { rule: null, withoutSize };
}
