import { computeFit } from '#shared/fit/compute-fit.ts';
import type { Finding, FitInput } from '#shared/fit/fit-schema.ts';
import { matchUnnamed, type UnnamedMatch, type UnnamedMatchInput } from '#shared/fit/match-unnamed.ts';

/** What takes too long to be done between two key strokes: it runs in a thread of its own. */
export type FitSearch = { task: 'findings'; input: FitInput } | { task: 'match'; input: UnnamedMatchInput };

/** Findings of a fit, or all equally good matches of unnamed targets. */
export type FitSearchAnswer = { task: 'findings'; findings: Finding[] } | { task: 'match'; matches: UnnamedMatch[] };

/** Does one search, whole. No findings where there is no fit. */
export function runFitSearch(search: FitSearch): FitSearchAnswer {
	if (search.task === 'match') return { task: 'match', matches: matchUnnamed(search.input).matches };
	const outcome = computeFit(search.input);
	return { task: 'findings', findings: outcome.ok ? outcome.result.findings : [] };
}
