import type { JudgedRow } from '#shared/check/derived/derived-row.ts';
import { derivedCharacteristics } from '#shared/tolerance/sheet-schema.ts';
import { type GlyphKind, glyphKindOf } from '#src/ui/glyph-kind.ts';

/** What the chips tell apart: as they stand in the address. */
export const verdictFilters = ['proud', 'shy', 'plan', 'close', 'undecided', 'unmeasured', 'norule', 'within'] as const;
export type VerdictFilter = (typeof verdictFilters)[number];

/** All but what is within: where one looks first. */
export const offVerdicts: readonly VerdictFilter[] = verdictFilters.filter((filter) => filter !== 'within');
/** The same without what was not seen: where that is most of it, it would bury what is off. Its count stays on its chip and in the headline. */
const offMeasured: readonly VerdictFilter[] = offVerdicts.filter((filter) => filter !== 'unmeasured');

/** What is shown of a check before anybody chose: what is off; all, where nothing is. */
export function firstShown(deviations: readonly JudgedRow[]): readonly VerdictFilter[] {
	const counts = countsOf(deviations);
	const off = deviations.length - counts.within;
	if (off === 0) return verdictFilters;
	const isBuried = counts.unmeasured > 30 && counts.unmeasured > (off - counts.unmeasured) * 2 && off > counts.unmeasured;
	return isBuried ? offMeasured : offVerdicts;
}

export const glyphOfFilter: Record<VerdictFilter, GlyphKind> = {
	proud: 'proud',
	shy: 'shy',
	plan: 'plan',
	close: 'close',
	undecided: 'close',
	unmeasured: 'none',
	norule: 'none',
	within: 'within',
};

/** The chip a deviation belongs to. */
export function filterOf(deviation: JudgedRow): VerdictFilter {
	if (deviation.verdict === 'undecided') return 'undecided';
	if (deviation.verdict === 'no-tolerance') return 'norule';
	const kind = glyphKindOf(deviation);
	return kind === 'none' ? 'unmeasured' : kind;
}

/** How many there are of each. */
export function countsOf(deviations: readonly JudgedRow[]): Record<VerdictFilter, number> {
	const counts: Record<VerdictFilter, number> = { proud: 0, shy: 0, plan: 0, close: 0, undecided: 0, unmeasured: 0, norule: 0, within: 0 };
	for (const deviation of deviations) counts[filterOf(deviation)] += 1;
	return counts;
}

const isDerived = ({ characteristic }: JudgedRow): boolean => derivedCharacteristics.some((derived) => derived === characteristic);

/** The chip's words. Faces stand proud or shy, levels are high or low: the word follows what is there. */
export function wordOfFilter(filter: VerdictFilter, deviations: readonly JudgedRow[]): string {
	if (filter === 'proud' || filter === 'shy') {
		const off = deviations.filter((deviation) => filterOf(deviation) === filter);
		const words = [
			...(off.some((deviation) => deviation.characteristic !== 'level' && !isDerived(deviation)) ? [filter] : []),
			...(off.some((deviation) => deviation.characteristic === 'level') ? [filter === 'proud' ? 'high' : 'low'] : []),
			...(off.some(isDerived) ? [filter === 'proud' ? 'over its limit' : 'under its limit'] : []),
		];
		return words.length === 0 ? filter : words.join(' or ');
	}
	return {
		plan: 'off in plan',
		close: 'too close to call',
		undecided: 'undecided',
		unmeasured: 'not measured',
		norule: 'no tolerance',
		within: 'within',
	}[filter];
}
