import { expect, it } from 'vitest';
import { plainMm, signedMm } from '#shared/tolerance/millimetre-text.ts';
import { ruleSentence } from '#shared/tolerance/rule-sentence.ts';
import type { ToleranceRule } from '#shared/tolerance/sheet-schema.ts';

const rule = (over: Partial<ToleranceRule>): ToleranceRule => ({ id: 'r', match: {}, lowerMm: -10, upperMm: 10, ...over });

it.each<[Partial<ToleranceRule>, string]>([
	[
		{ match: { class: 'IfcColumn', characteristic: 'plumb' }, lowerMm: { minus: { heightOver: 500 } }, upperMm: { heightOver: 500 } },
		'Columns, plumb: at most height/500 either way',
	],
	[
		{ match: { class: 'IfcMechanicalFastener', characteristic: 'plan' }, lowerMm: null, upperMm: 6 },
		'Anchor bolts in plan: at most 6 mm from their mark',
	],
	[{ match: { class: 'IfcColumn', characteristic: 'face' } }, 'Columns, faces: −10 to +10 mm'],
	[
		{ match: { class: 'IfcSlab', characteristic: 'level', stage: 'as-cast-shored' }, lowerMm: 0, upperMm: 6.35 },
		'Slabs, level, as cast, shored: 0 to +6.35 mm',
	],
	[
		{ match: { characteristic: 'level', storey: 'Level 2' }, lowerMm: null },
		'Everything, level, on Level 2: at most +10 mm, no limit on the − side',
	],
	[{ upperMm: null }, 'Everything: at least −10 mm, no limit on the + side'],
	[
		{
			match: { class: 'IfcWall', characteristic: 'plumb' },
			lowerMm: { minus: { greaterOf: [15, { heightOver: 400 }] } },
			upperMm: { greaterOf: [15, { heightOver: 400 }] },
		},
		'Walls, plumb: at most the greater of 15 mm and height/400 either way',
	],
	[
		{
			match: { class: 'IfcColumn', characteristic: 'section' },
			lowerMm: -5,
			upperMm: {
				between: [
					[150, 10],
					[400, 15],
				],
				of: 'thickness',
			},
		},
		'Columns, section: from −5 mm to + 10 mm at 150 mm to 15 mm at 400 mm thick, straight between',
	],
	[
		{ match: { class: 'IfcColumn', characteristic: 'plan', sizeMm: [3000, 6000], of: 'height' }, shape: 'box', axes: 'grid' },
		'Columns in plan, over 3000 to 6000 mm high: −10 to +10 mm along each grid axis',
	],
	[
		{ match: { class: 'IfcSlab', characteristic: 'flatness' }, straightedgeM: 4, lowerMm: null, upperMm: 12 },
		'Slabs, flatness under a straightedge of 4 m: at most 12 mm',
	],
])('%j', (over, sentence) => {
	expect(ruleSentence(rule(over))).toBe(sentence);
});

it('writes figures with a real minus, no sign on a rounded zero, halves away from zero', () => {
	expect([signedMm(-0.4, 0), signedMm(16.2, 0), signedMm(-9.5, 0), signedMm(0.05, 1), signedMm(-1.005, 2), plainMm(-2.44, 1)]).toEqual([
		'0',
		'+16',
		'−10',
		'+0.1',
		'−1.01',
		'2.4',
	]);
});
