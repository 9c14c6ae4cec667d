import { describe, expect, it } from 'vitest';
import { type LineFacts, lineOf } from '../../server/features/site/line.ts';

const nothing: LineFacts = {
	models: [],
	markCount: null,
	surveyCount: 0,
	isNewestSurveyFitted: false,
	newestCheck: null,
	recordCount: 0,
	flags: { open: 0, closed: 0 },
	pours: [],
};
const summary = { within: 61, outside: 4, 'too-close-to-call': 2, undecided: 0, 'not-measured': 3, 'no-tolerance': 0 };
const check = { checkId: 'c', number: 3, state: 'trial' as const, summary, restsOnNewest: true };
// A Monday; the site's clock is two hours ahead in summer.
const now = new Date('2026-07-06T10:00:00Z');
const zone = 'Europe/Zurich';

const knot = (facts: Partial<LineFacts>, name: string) => {
	const found = lineOf({ ...nothing, ...facts }, now, zone).knots.find((candidate) => candidate.knot === name);
	return `${found?.state} ${found?.figure}`.trim();
};

describe('the line', () => {
	it('has its seven places in their order, open where there is nothing', () => {
		const { knots, isTaut, newestCheckId } = lineOf(nothing, now, zone);
		expect(knots.map((place) => place.knot)).toEqual(['model', 'control', 'surveys', 'check', 'flags', 'pours', 'records']);
		expect(knots.every(({ state, figure }) => state === 'open' && figure === '')).toBe(true);
		expect(isTaut).toBe(true);
		expect(newestCheckId).toBeNull();
	});

	it('has a model in order once every newest revision is read', () => {
		expect(knot({ models: [{ state: 'ready', number: 4 }] }, 'model')).toBe('solid rev 4');
		expect(knot({ models: [{ state: 'reading', number: 5 }] }, 'model')).toBe('half rev 5');
		const two: LineFacts['models'] = [
			{ state: 'ready', number: 1 },
			{ state: 'failed', number: 2 },
		];
		expect(knot({ models: two }, 'model')).toBe('half 2 models');
	});

	it('counts the flags that are still to be settled', () => {
		expect(knot({}, 'flags')).toBe('open');
		expect(knot({ flags: { open: 6, closed: 2 } }, 'flags')).toBe('half 6 open');
		expect(knot({ flags: { open: 0, closed: 2 } }, 'flags')).toBe('solid all closed');
	});

	it('counts marks and surveys', () => {
		expect(knot({ markCount: 9 }, 'control')).toBe('solid 9 marks');
		expect(knot({ markCount: 1 }, 'control')).toBe('solid 1 mark');
		expect(knot({ surveyCount: 2 }, 'surveys')).toBe('half 2');
		expect(knot({ surveyCount: 2, isNewestSurveyFitted: true }, 'surveys')).toBe('solid 2');
	});

	it('says what the newest check found, no counts where they are not all this person’s to see', () => {
		expect(knot({ newestCheck: check }, 'check')).toBe('half 4 outside');
		expect(knot({ recordCount: 8 }, 'records')).toBe('solid 8');
		expect(knot({ newestCheck: { ...check, state: 'published' } }, 'check')).toBe('solid 4 outside');
		expect(knot({ newestCheck: { ...check, summary: { ...summary, outside: 0 } } }, 'check')).toBe('half 61 within');
		expect(knot({ newestCheck: { ...check, state: 'computing', summary: null } }, 'check')).toBe('half computing');
		expect(knot({ newestCheck: { ...check, summary: null } }, 'check')).toBe('half no. 3');
		expect(lineOf({ ...nothing, newestCheck: { ...check, restsOnNewest: false } }, now, zone)).toMatchObject({
			isTaut: false,
			newestCheckId: 'c',
		});
	});

	it('names the next pour by the site’s clock', () => {
		const planned = (plannedAt: string) => ({ state: 'planned' as const, plannedAt: new Date(plannedAt) });
		expect(knot({ pours: [planned('2026-07-09T05:00:00Z')] }, 'pours')).toBe('half next Thu 07:00');
		expect(knot({ pours: [planned('2026-07-09T23:30:00Z'), planned('2026-07-01T05:00:00Z')] }, 'pours')).toBe('half next Fri 01:30');
		expect(knot({ pours: [planned('2026-07-20T05:00:00Z')] }, 'pours')).toBe('half next 20 Jul 07:00');
		expect(knot({ pours: [{ state: 'planned', plannedAt: null }] }, 'pours')).toBe('half 1 pour');
		const cast = { state: 'cast' as const, plannedAt: new Date('2026-07-01T05:00:00Z') };
		expect(knot({ pours: [cast, cast] }, 'pours')).toBe('solid 2 pours');
	});
});
