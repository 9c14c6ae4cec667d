import { describe, expect, it } from 'vitest';
import type { CheckDetail } from '#shared/check/contract.ts';
import { elementSummary } from '#shared/check/element-summary.ts';
import { checkHeadline, headlineCounts } from '#shared/check/headline.ts';
import { type CheckFilter, derivedRowsOf, elementGroups, shownGroups } from '#src/features/check/element-groups.ts';
import { countsOf, offVerdicts, verdictFilters, wordOfFilter } from '#src/features/check/verdict-filter.ts';
import { aCheck, aFace, pourId } from './a-check.ts';

const groups = elementGroups(aCheck(), () => '');
const all: CheckFilter = { verdicts: verdictFilters, pourId: null, storey: null, find: '' };
const shown = (over: Partial<CheckFilter>, chosenId: string | null = null) =>
	shownGroups(groups, { ...all, ...over }, chosenId).map(
		(group) => `${group.element.mark}: ${group.rows.map((row) => row.checkpointId).join(' ')}`,
	);

describe('the table’s elements', () => {
	it('come with the worst first, and within them the worst row first', () => {
		expect(shown({})).toEqual(['C2-1: C2-east', 'B1-G: B1-east B1-west', 'D3-G: D3-east D3-west', 'A0-G: A0-east']);
	});

	it('follow verdict, pour, storey and mark together', () => {
		expect(shown({ verdicts: offVerdicts })).toEqual(['C2-1: C2-east', 'B1-G: B1-east', 'D3-G: D3-east D3-west']);
		expect(shown({ verdicts: ['shy'] })).toEqual(['C2-1: C2-east']);
		expect(shown({ pourId, verdicts: offVerdicts })).toEqual(['B1-G: B1-east', 'D3-G: D3-east D3-west']);
		expect(shown({ storey: 'First' })).toEqual(['C2-1: C2-east']);
		expect(shown({ find: 'b/1' })).toEqual(['B1-G: B1-east B1-west']);
		expect(shown({ find: 'B1' })).toEqual(shown({ find: 'b 1, ground' }));
		expect(shown({ find: 'nothing of the kind' })).toEqual([]);
	});

	it('keep the chosen row whatever the filter says, so that a link leads somewhere', () => {
		expect(shown({ verdicts: ['proud'], storey: 'Ground' }, 'C2-east')).toEqual(['C2-1: C2-east', 'B1-G: B1-east']);
	});
});

describe('derived results', () => {
	const leaning: CheckDetail['derived'][number] = {
		elementId: aCheck().elements[0]!.elementId,
		characteristic: 'plumb',
		label: 'along east over 2.4 m',
		deviationMm: 23,
		uncertaintyMm: 3,
		limitsMm: [-12, 12],
		ruleId: 'plumb',
		verdict: 'outside',
		conformity: 0,
		from: ['A0-east'],
	};
	const check = aCheck({ derived: [leaning, { ...leaning, verdict: 'within', deviationMm: 1, label: 'along north over 2.4 m' }] });

	it('are rows of their element, which is as bad as the worst of all its rows', () => {
		const withDerived = elementGroups(check, (rows, derived) => elementSummary(rows, derived) ?? '');
		expect(withDerived.map(({ element, rows }) => [element.mark, rows.length])).toEqual([
			['C2-1', 1],
			['A0-G', 3],
			['B1-G', 2],
			['D3-G', 2],
		]);
		expect(withDerived[1]!.rows.map(({ checkpointId }) => checkpointId)).toEqual(['derived-1', 'A0-east', 'derived-2']);
		expect(withDerived[1]!.phrase).toMatch(/^leans 23 mm east/);
		expect(shownGroups(withDerived, { ...all, verdicts: ['proud'] }, null).map(({ element }) => element.mark)).toEqual(['A0-G', 'B1-G']);
	});

	it('count for the headline as elements off, never as points', () => {
		expect(checkHeadline(headlineCounts(check.deviations, check.derived))).toBe('3 elements off, 1 point too close to call, 1 not seen');
	});

	it('have their word on the chip', () => {
		expect(wordOfFilter('proud', derivedRowsOf(check))).toBe('over its limit');
	});
});

describe('the chips', () => {
	it('count every deviation once', () => {
		const { deviations } = aCheck();
		const counts = countsOf(deviations);
		expect(counts).toEqual({ proud: 1, shy: 1, plan: 0, close: 1, undecided: 0, unmeasured: 1, norule: 0, within: 2 });
		expect(Object.values(counts).reduce((sum, count) => sum + count, 0)).toBe(deviations.length);
	});

	it('say high and low of levels, proud and shy of faces', () => {
		const face = aFace({ checkpointId: 'f', elementId: 'e', deviationMm: 20 });
		const level = aFace({ checkpointId: 'l', elementId: 'e', deviationMm: 20, characteristic: 'level', direction: null });
		expect(wordOfFilter('proud', [face])).toBe('proud');
		expect(wordOfFilter('proud', [level])).toBe('high');
		expect(wordOfFilter('proud', [face, level])).toBe('proud or high');
	});
});
