import { describe, expect, it } from 'vitest';
import type { DerivedResult } from '#shared/check/check-schema.ts';
import { derivedRow } from '#shared/check/derived/derived-row.ts';
import { deviationSentence } from '#shared/check/sentence.ts';

const result = (over: Partial<DerivedResult>): DerivedResult => ({
	elementId: 'e1',
	characteristic: 'plumb',
	label: 'along east over 2.4 m',
	deviationMm: 23.2,
	uncertaintyMm: 3,
	limitsMm: [-12, 12],
	ruleId: 'r',
	verdict: 'outside',
	conformity: 0,
	from: ['a', 'b'],
	...over,
});

describe('a derived result in words', () => {
	it.each<[Partial<DerivedResult>, string]>([
		[{}, 'Plumb, east–west, over 2.4 m: leans 23 mm east. Allowed −12 to +12. Known to ±3. Outside, by 11 mm.'],
		[{ deviationMm: -23.2 }, 'Plumb, east–west, over 2.4 m: leans 23 mm west. Allowed −12 to +12. Known to ±3. Outside, by 11 mm.'],
		[
			{ label: 'along north over 3.0 m', deviationMm: 0.2, verdict: 'within' },
			'Plumb, north–south, over 3.0 m: does not lean. Allowed −12 to +12. Known to ±3. Within.',
		],
		[
			{ label: 'along 30° from north over 3.0 m', deviationMm: -5, verdict: 'within' },
			'Plumb, 30° from north, over 3.0 m: leans 5 mm away from 30° from north. Allowed −12 to +12. Known to ±3. Within.',
		],
		[
			{ characteristic: 'section', label: 'section of 400 mm', deviationMm: -16, limitsMm: [-10, 10] },
			'Section of 400 mm: 16 mm too thin. Allowed −10 to +10. Known to ±3. Outside, by 6 mm.',
		],
		[
			{
				characteristic: 'flatness',
				label: 'greatest gap under a straightedge of 4 m',
				deviationMm: 9,
				limitsMm: [null, 10],
				verdict: 'too-close-to-call',
			},
			'Flatness, greatest gap under a straightedge of 4 m: 9 mm. Allowed up to +10. Known to ±3. Too close to call.',
		],
		[
			{ characteristic: 'bolt-distance', label: 'BC2-G-1 to BC2-G-2, 300 mm', deviationMm: -4, limitsMm: [-3, 3], uncertaintyMm: 0.5 },
			'BC2-G-1 to BC2-G-2, 300 mm: 4.0 mm too close together. Allowed −3 to +3. Known to ±0.5. Outside, by 1.0 mm.',
		],
		[
			{ characteristic: 'group-shift', label: 'BC2-G, 4 marks, shift north', deviationMm: -6, verdict: 'within' },
			'BC2-G, 4 marks, north–south: 6 mm south. Allowed −12 to +12. Known to ±3. Within.',
		],
		[
			{ characteristic: 'group-turn', label: 'BC2-G, 4 marks, turn at 283 mm', deviationMm: 6, verdict: 'within' },
			'BC2-G, 4 marks, turn at 283 mm: 6 mm anticlockwise. Allowed −12 to +12. Known to ±3. Within.',
		],
		[
			{
				characteristic: 'projection',
				label: 'BC2-G-1, projection of 200 mm over S1.T1',
				deviationMm: 6,
				limitsMm: null,
				verdict: 'no-tolerance',
				uncertaintyMm: null,
			},
			'BC2-G-1, projection of 200 mm over S1.T1: 6 mm too far out. How well it is known is not known. No tolerance.',
		],
	])('%j', (over, sentence) => {
		expect(deviationSentence(derivedRow(result(over), 0))).toBe(sentence);
	});
});
