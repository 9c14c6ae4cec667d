import { describe, expect, it } from 'vitest';
import type { Deviation } from '#shared/check/check-schema.ts';
import { figureWords, flagHeadline } from '#shared/flag/to-come.ts';

const face = (heightM: number, deviationMm: number | null, over: Partial<Deviation> = {}): Deviation => ({
	checkpointId: `p${heightM}`,
	elementId: 'e',
	characteristic: 'face',
	place: [0, 0, heightM],
	direction: [1, 0, 0],
	label: `East face, ${heightM} m above its base`,
	measured: null,
	notMeasuredReason: null,
	pointName: null,
	setupId: 's',
	pointCount: 1,
	deviationMm,
	offsetMm: null,
	covarianceMm2: null,
	standardUncertaintyPartsMm: { fit: 0.5, point: 1, common: 0.5 },
	expandedUncertaintyMm: 3,
	limitsMm: [-10, 10],
	ruleId: null,
	verdict: deviationMm !== null && Math.abs(deviationMm) > 10 ? 'outside' : 'within',
	beyondMm: null,
	conformity: null,
	...over,
});
const at = (stage: 'before-pour' | 'as-cast', ...deviations: Deviation[]) => deviations.map((deviation) => ({ deviation, stage }));

describe('the figure of a flag', () => {
	it('is what is yet to come before the pour, and how far it is off after it', () => {
		const column = [face(4.4, 23), face(2.8, 16), face(1, 9)];
		expect(figureWords(at('before-pour', ...column))).toBe('Top to come 23 west');
		expect(figureWords(at('as-cast', ...column))).toBe('Top 23 east');
		expect(flagHeadline('C/3, ground', 'C/3, ground, faces', at('before-pour', ...column))).toBe('C/3, ground, leans east');
		expect(figureWords(at('before-pour', face(4.4, 3), face(1, -14)))).toBe('Foot to come 14 east');
		expect(figureWords(at('before-pour', face(1, 14)))).toBe('To come 14 west');
	});

	it('goes both ways in plan, up and down in height, and is nothing where nothing was measured', () => {
		const plan = face(0, 5.4, { characteristic: 'plan', direction: null, offsetMm: [5, -2], verdict: 'outside' });
		expect(figureWords(at('before-pour', plan))).toBe('To come 5 west, 2 north');
		expect(figureWords(at('as-cast', plan))).toBe('5 east, 2 south');
		const level = face(0, -8, { characteristic: 'level', direction: null, verdict: 'outside' });
		expect(figureWords(at('before-pour', level))).toBe('To come 8 up');
		expect(figureWords(at('as-cast', level))).toBe('8 low');
		expect(figureWords(at('as-cast', face(1, null)))).toBeNull();
		expect(figureWords([])).toBeNull();
	});
});
