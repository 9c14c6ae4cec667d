import { describe, expect, it } from 'vitest';
import { checkHeadline, headlineCounts } from '#shared/check/headline.ts';
import { deviationSentence, type SaidDeviation, verdictWords } from '#shared/check/sentence.ts';

const said = (over: Partial<SaidDeviation>): SaidDeviation => ({
	label: 'East face, 2.8 m above its base',
	characteristic: 'face',
	deviationMm: 16.2,
	offsetMm: null,
	limitsMm: [-10, 10],
	expandedUncertaintyMm: 3.1,
	verdict: 'outside',
	beyondMm: 6.2,
	notMeasuredReason: null,
	...over,
});

describe('the sentence of a rod', () => {
	it.each<[Partial<SaidDeviation>, string]>([
		[{}, 'East face, 2.8 m above its base: 16 mm proud. Allowed −10 to +10. Known to ±3. Outside, by 6 mm.'],
		[
			{ deviationMm: -4.4, verdict: 'within', beyondMm: null, limitsMm: [-10, null] },
			'East face, 2.8 m above its base: 4 mm shy. Allowed down to −10. Known to ±3. Within.',
		],
		[
			{
				label: 'Top',
				characteristic: 'level',
				deviationMm: -8.26,
				expandedUncertaintyMm: 0.84,
				verdict: 'too-close-to-call',
				beyondMm: null,
			},
			'Top: 8.3 mm low. Allowed −10 to +10. Known to ±0.8. Too close to call.',
		],
		[
			{
				label: 'Bolt 3',
				characteristic: 'plan',
				deviationMm: 5.4,
				offsetMm: [5.1, -2.2],
				limitsMm: [null, 6.35],
				verdict: 'within',
				beyondMm: null,
			},
			'Bolt 3: 5 east, 2 south of its mark. Allowed 6.35 any way. Known to ±3. Within.',
		],
		[
			{ deviationMm: 10.3, beyondMm: 0.3 },
			'East face, 2.8 m above its base: 10 mm proud, just past its limit. Allowed −10 to +10. Known to ±3. Outside, by less than 1 mm.',
		],
		[
			{ deviationMm: -9.6, verdict: 'too-close-to-call', beyondMm: null },
			'East face, 2.8 m above its base: 10 mm shy, just inside its limit. Allowed −10 to +10. Known to ±3. Too close to call.',
		],
		[
			{ deviationMm: 10, expandedUncertaintyMm: 0, verdict: 'within', beyondMm: null },
			'East face, 2.8 m above its base: 10.0 mm proud, exactly on its limit. Allowed −10 to +10. Known to ±0.1. Within.',
		],
		[
			{ deviationMm: 0.2, verdict: 'within', beyondMm: null },
			'East face, 2.8 m above its base: on the design face. Allowed −10 to +10. Known to ±3. Within.',
		],
		[
			{ limitsMm: null, verdict: 'no-tolerance', beyondMm: null },
			'East face, 2.8 m above its base: 16 mm proud. Known to ±3. No tolerance.',
		],
		[
			{ expandedUncertaintyMm: null, verdict: 'undecided', beyondMm: null },
			'East face, 2.8 m above its base: 16 mm proud. Allowed −10 to +10. How well it is known is not known. Undecided.',
		],
		[
			{
				deviationMm: null,
				verdict: 'not-measured',
				beyondMm: null,
				expandedUncertaintyMm: null,
				notMeasuredReason: 'no survey point of its name or within reach',
			},
			'East face, 2.8 m above its base: not measured, no survey point of its name or within reach. Allowed −10 to +10.',
		],
	])('%j', (over, sentence) => {
		expect(deviationSentence(said(over))).toBe(sentence);
	});
	it('says before the pour which way a mark has to go, and minds a decimal comma', () => {
		const bolt = said({
			label: 'Bolt 3',
			characteristic: 'plan',
			deviationMm: 5.4,
			offsetMm: [5.1, -2.2],
			limitsMm: [null, 6],
			verdict: 'within',
			beyondMm: null,
		});
		expect(deviationSentence(bolt, { stage: 'before-pour' })).toBe(
			'Bolt 3: 5 east, 2 south of its mark. To come 5 west, 2 north. Allowed 6 any way. Known to ±3. Within.',
		);
		expect(deviationSentence(said({ expandedUncertaintyMm: 0.9 }), { decimalMark: ',' })).toBe(
			'East face, 2,8 m above its base: 16,2 mm proud. Allowed −10 to +10. Known to ±0,9. Outside, by 6,2 mm.',
		);
	});
	it('has few words beside the rod', () => {
		expect(verdictWords(said({}))).toBe('outside, by 6');
		expect(verdictWords(said({ expandedUncertaintyMm: 0.5 }))).toBe('outside, by 6.2');
		expect(verdictWords(said({ beyondMm: 0.2 }))).toBe('outside, by less than 1');
		expect(verdictWords(said({ verdict: 'too-close-to-call', beyondMm: null }))).toBe('too close to call');
	});
});

describe('the headline', () => {
	const counts = (list: Record<string, number>) =>
		headlineCounts(
			Object.entries(list).flatMap(([verdict, n]) =>
				Array.from({ length: n }, (_, k) => ({ elementId: `${verdict}-${k >> 1}`, verdict: verdict as never })),
			),
		);
	it.each<[Record<string, number>, string | null, string]>([
		[
			{ outside: 12, 'too-close-to-call': 9, 'not-measured': 14, within: 3 },
			'Pour 7',
			'Pour 7 is not ready: 6 elements off, 9 points too close, 14 not seen',
		],
		[{ outside: 12, 'too-close-to-call': 9, 'not-measured': 14 }, null, '6 elements off, 9 points too close to call, 14 not seen'],
		[{ outside: 1, within: 3 }, null, '1 element off'],
		[{ within: 38 }, null, 'All 38 points are within'],
		[{ within: 38 }, 'Pour 7', 'Pour 7: all 38 points are within'],
		[{ 'not-measured': 5 }, null, 'Nothing measured yet, 5 points not seen'],
		[{ undecided: 2, 'no-tolerance': 4, within: 1 }, null, '2 undecided, 4 without a rule'],
		[{}, null, 'No checkpoints to measure'],
	])('%j for %s: %s', (list, pour, sentence) => {
		expect(checkHeadline(counts(list), pour)).toBe(sentence);
	});
});
