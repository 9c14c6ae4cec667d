import { describe, expect, it } from 'vitest';
import { type CheckFilter, elementGroups, shownGroups } from '#src/features/check/element-groups.ts';
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
