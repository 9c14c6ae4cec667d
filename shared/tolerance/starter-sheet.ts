import type { ToleranceSheet } from './sheet-schema.ts';

/**
 * A sheet to start from, never to build on unread: extracts of published tolerances, each with where it stands, chosen so that a first check
 * has limits. Check against your contract documents; the engineer of record decides. A standard is to be read whole: single clauses taken
 * out of it mislead, and contracts often change them.
 */
export const starterSheet: ToleranceSheet = {
	name: 'Starting points',
	decision: 'guarded',
	rules: [
		{
			id: 'bolts-plan',
			match: { class: 'IfcMechanicalFastener', characteristic: 'plan' },
			lowerMm: null,
			upperMm: 6.35,
			shape: 'disc',
			reference: 'grid',
			source: 'ACI 117: ±1/4 in. for anchor bolts of 3/4 in., as quoted by secondary texts; taken as a circle',
			clause: 'anchor bolts, placement',
			edition: '2006',
		},
		{
			id: 'slab-level-shored',
			match: { class: 'IfcSlab', characteristic: 'level', stage: 'as-cast-shored' },
			lowerMm: -19.05,
			upperMm: 19.05,
			reference: 'frame',
			source:
				'UFGS 03700, a United States government guide specification that follows ACI 117: ±3/4 in. for formed slab tops before shores are removed',
			clause: 'tolerances for formed surfaces, level',
			edition: '03700',
		},
		{
			id: 'levels',
			match: { characteristic: 'level' },
			lowerMm: -16,
			upperMm: 16,
			reference: 'frame',
			source: 'DIN 18202, limit deviations for heights and levels, nominal size over 1 m to 6 m, as reprinted by a concrete trade body',
			clause: 'Table 1, heights',
			edition: '2013-04',
		},
		{
			id: 'plan',
			match: { characteristic: 'plan' },
			lowerMm: null,
			upperMm: 20,
			shape: 'disc',
			reference: 'grid',
			source:
				'DIN 18202, limit deviations for lengths, axes and grid, nominal size over 6 m to 15 m, as reprinted by a concrete trade body; taken as a circle, which lies inside the ±20 mm along each axis',
			clause: 'Table 1, plan',
			edition: '2013-04',
		},
		{
			id: 'faces',
			match: { characteristic: 'face' },
			lowerMm: -25.4,
			upperMm: 25.4,
			reference: 'frame',
			source:
				'UFGS 03700, a United States government guide specification that follows ACI 117: ±1 in. for lines, surfaces and arrises up to 100 ft high',
			clause: 'tolerances for formed surfaces, plumb and alignment',
			edition: '03700',
		},
	],
};
