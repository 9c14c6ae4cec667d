import type { Limit, ToleranceRule } from './sheet-schema.ts';

/** What is said wherever shipped figures are shown. */
export const extractCaution = 'Check against your contract documents; the engineer of record decides.';

/** A rule with a published figure, and by which words the publication names what the figure holds for. */
export interface PublishedRule {
	readonly rule: ToleranceRule;
	readonly published: string;
}

/** Figures of one publication. Never the whole of it: what is left out may change what stands here. */
export interface PublishedExtract {
	readonly name: string;
	/** What it is and where the figures were read. */
	readonly about: string;
	readonly rules: readonly PublishedRule[];
}

const inchMm = 25.4;
/** 100 ft, to which the figures for plumb lines and alignment hold. */
const hundredFeetMm = 1200 * inchMm;

const both = (limit: Exclude<Limit, null>): Pick<ToleranceRule, 'lowerMm' | 'upperMm'> => ({
	lowerMm: typeof limit === 'number' ? 0 - limit : ({ minus: limit } as Limit),
	upperMm: limit,
});

const ufgs = {
	source: 'UFGS 03700, a United States government guide specification with tolerances of the kind of ACI 117-90',
	edition: 'UFGS 03700',
};

const concreteInInches: PublishedExtract = {
	name: 'Cast-in-place concrete, inches (UFGS 03700)',
	about: 'Read in the guide specification, page 26. It follows ACI 117, which asks to be read whole: single clauses mislead.',
	rules: [
		{
			published: 'vertical alignment, height up to 100 ft',
			rule: {
				id: 'ufgs-plumb',
				match: { characteristic: 'plumb', sizeMm: [0, hundredFeetMm], of: 'height' },
				...both(inchMm),
				clause: 'plumb, height up to 100 ft',
				...ufgs,
			},
		},
		{
			published: 'vertical alignment, height over 100 ft: h/1000, at most 6 in.',
			rule: {
				id: 'ufgs-plumb-tall',
				match: { characteristic: 'plumb', sizeMm: [hundredFeetMm, 1_000_000], of: 'height' },
				...both({ lesserOf: [6 * inchMm, { heightOver: 1000 }] }),
				clause: 'plumb, height over 100 ft',
				...ufgs,
			},
		},
		{
			published: 'lateral alignment of members',
			rule: {
				id: 'ufgs-alignment',
				match: { characteristic: 'face' },
				...both(inchMm),
				reference: 'frame',
				clause: 'lateral alignment of members; taken along each face’s normal',
				...ufgs,
			},
		},
		{
			published: 'level of slabs, of formed surfaces before removal of shores',
			rule: {
				id: 'ufgs-level-shored',
				match: { class: 'IfcSlab', characteristic: 'level', stage: 'as-cast-shored' },
				...both(0.75 * inchMm),
				reference: 'frame',
				clause: 'level of formed surfaces before removal of shores',
				...ufgs,
			},
		},
		{
			published: 'cross-section, 12 in. or less',
			rule: {
				id: 'ufgs-section',
				match: { characteristic: 'section', sizeMm: [0, 12 * inchMm], of: 'thickness' },
				lowerMm: -0.25 * inchMm,
				upperMm: 0.375 * inchMm,
				clause: 'cross-section, 12 in. or less',
				...ufgs,
			},
		},
	],
};

const din = {
	source: 'DIN 18202, as reprinted by a concrete trade body',
	edition: '2013-04',
};

/** Nominal sizes over the first, up to and with the second, metres, with the limit deviation ±, millimetres. */
type Bands = readonly (readonly [number, number, number])[];

const heightBands: Bands = [
	[0, 1, 10],
	[1, 3, 16],
	[3, 6, 16],
	[6, 15, 20],
	[15, 30, 30],
];
const openingBands: Bands = [
	[0, 1, 10],
	[1, 3, 12],
	[3, 6, 16],
];

const dinSizes: PublishedExtract = {
	name: 'Levels and openings by nominal size (DIN 18202, table 1)',
	about: 'Read in a reprint of table 1. The nominal size is taken from the element: for levels its height, for openings the length.',
	rules: [
		...openingBands.map(([overM, toM, limitMm]) => ({
			published: `openings, nominal size over ${overM} m to ${toM} m`,
			rule: {
				id: `din-opening-${toM}`,
				match: {
					class: 'IfcOpeningElement',
					characteristic: 'section' as const,
					sizeMm: [overM * 1000, toM * 1000] as [number, number],
					of: 'length' as const,
				},
				...both(limitMm),
				clause: `Table 1, openings, over ${overM} m to ${toM} m`,
				...din,
			},
		})),
		...heightBands.map(([overM, toM, limitMm]) => ({
			published: `section dimensions, nominal size over ${overM} m to ${toM} m`,
			rule: {
				id: `din-level-${toM}`,
				match: { characteristic: 'level' as const, sizeMm: [overM * 1000, toM * 1000] as [number, number], of: 'height' as const },
				...both(limitMm),
				reference: 'frame' as const,
				clause: `Table 1, heights, over ${overM} m to ${toM} m`,
				...din,
			},
		})),
	],
};

const dinGauge = {
	source:
		'DIN 18202, as reprinted from a handbook of the screed trade after an older edition; lines 2 and 5 changed since and are left out',
	edition: 'before 2013',
};

/** Lines of table 3 under a straightedge of 4 m: the gap in millimetres, and the class of element it is taken for. */
const gauges: readonly (readonly [string, string, number])[] = [
	['1 unfinished tops of slabs', 'IfcSlab', 20],
	['3 finished floors', 'IfcCovering', 10],
	['6 finished walls and soffits', 'IfcWall', 10],
];

const dinFlatness: PublishedExtract = {
	name: 'Flatness under a straightedge of 4 m (DIN 18202, table 3)',
	about: 'Gaps between high points, not about a best-fit plane. Other lengths have other gaps, straight between those of the table.',
	rules: gauges.map(([line, className, gapMm]) => ({
		published: line,
		rule: {
			id: `din-flat-${line.charAt(0)}`,
			match: { class: className, characteristic: 'flatness' as const },
			lowerMm: null,
			upperMm: gapMm,
			straightedgeM: 4,
			clause: `Table 3, line ${line}, 4 m`,
			...dinGauge,
		},
	})),
};

const steel: PublishedExtract = {
	name: 'Steel columns and anchor rods (AISC 303)',
	about:
		'Plumb read in the text of 2016. The distances of anchor rods are quoted by engineers from the 9th and 13th edition of the manual.',
	rules: [
		{
			published: 'plumb of an individual column shipping piece: 1/500 of the distance between working points',
			rule: {
				id: 'aisc-plumb',
				match: { class: 'IfcColumn', characteristic: 'plumb' },
				...both({ heightOver: 500 }),
				source: 'AISC 303; for steel columns, the height taken as the distance between working points',
				clause: '7.13.1.1',
				edition: '2016',
			},
		},
		{
			published: 'anchor rods in a group, centre to centre, at most 1/8 in.',
			rule: {
				id: 'aisc-rods',
				match: { class: 'IfcMechanicalFastener', characteristic: 'bolt-distance' },
				...both(inchMm / 8),
				reference: 'group',
				source: 'AISC Code of Standard Practice, as quoted by engineers from the 9th and 13th edition of the manual',
				clause: '7.5.1 (a)',
				edition: '9th and 13th edition of the manual',
			},
		},
	],
};

/** Published figures to take rules from: extracts, starting points and nothing more. */
export const publishedExtracts: readonly PublishedExtract[] = [concreteInInches, dinSizes, dinFlatness, steel];
