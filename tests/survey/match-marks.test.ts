import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { isTargetCode, matchMarks } from '#shared/survey/match-marks.ts';

describe('which target is which mark', () => {
	it('takes the same name after trimming, and a loose one only where it is the only one', () => {
		const found = matchMarks(['T1 ', 't-2', 'T3', 'BM.4', 'P7'], ['T1', 'T2', 'T 3', 'BM 4']);
		expect([...found]).toEqual([
			['T1 ', { mark: 'T1', isLoose: false }],
			['t-2', { mark: 'T2', isLoose: true }],
			['T3', { mark: 'T 3', isLoose: true }],
			['BM.4', { mark: 'BM 4', isLoose: true }],
		]);
	});

	it('does not choose between two marks, or two names, that read the same loosely', () => {
		expect(matchMarks(['t2'], ['T-2', 'T2']).size).toBe(0);
		expect(matchMarks(['t2', 'T-2'], ['T_2']).size).toBe(0);
		expect(matchMarks(['T2', 't-2'], ['T2'])).toEqual(new Map([['T2', { mark: 'T2', isLoose: false }]]));
		expect(matchMarks(['T01', '--'], ['T1', '-']).size).toBe(0);
	});

	it('gives every mark to one spelling at most', () => {
		const word = fc.stringMatching(/^[tT][- _]?[12]$/);
		fc.assert(
			fc.property(fc.uniqueArray(word), fc.uniqueArray(word), (names, marks) => {
				const given = [...matchMarks(names, marks).values()].map(({ mark }) => mark);
				expect(new Set(given).size).toBe(given.length);
			}),
		);
	});

	it('knows the codes of targets as words', () => {
		for (const code of ['CP', 'cp', 'BM-2', 'TGT 4', 'CHK1', ' BS']) expect(isTargetCode(code), code).toBe(true);
		for (const code of ['', 'CPX', 'BOLT', 'TPO', '1CP', 'COL BM']) expect(isTargetCode(code), code).toBe(false);
	});
});
