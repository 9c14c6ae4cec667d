import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { evaluateLimit, evaluateLimits } from '#shared/tolerance/limit.ts';
import { matchRule } from '#shared/tolerance/match-rule.ts';
import { publishedExtracts } from '#shared/tolerance/published-extracts.ts';
import type { Limit } from '#shared/tolerance/sheet-schema.ts';

const all = publishedExtracts.flatMap(({ rules }) => rules);
const papers = '../shared/checks/tolerances-published.json';

interface Paper {
	tolerances: { standard: string; what: string; upperMm: Limit; lowerMm: Limit; source: string; reading?: string }[];
	flatnessDIN18202Table3: { source: string; rows: { line: string; distanceM: number; gaugeMm: number }[] };
}

describe('published figures that are shipped', () => {
	it('each name their source, clause and edition, and have an id of their own', () => {
		for (const { rule } of all)
			expect(
				[rule.source, rule.clause, rule.edition].every((word) => word && word.length > 3),
				rule.id,
			).toBe(true);
		expect(new Set(all.map(({ rule }) => rule.id)).size).toBe(all.length);
	});

	// Worked by hand from the publications' own words: 1 in. = 25.4 mm, h/1000, 1/500 of the height.
	const h = (height: number) => ({ height, length: height, thickness: 0.3 });
	it.each([
		['ufgs-plumb', h(3), [-25.4, 25.4]],
		['ufgs-plumb-tall', h(60), [-60, 60]],
		['ufgs-plumb-tall', h(300), [-152.4, 152.4]],
		['ufgs-alignment', h(3), [-25.4, 25.4]],
		['ufgs-level-shored', h(0.3), [-19.05, 19.05]],
		['ufgs-section', h(3), [-6.35, 9.525]],
		['din-level-3', h(3), [-16, 16]],
		['din-level-15', h(8), [-20, 20]],
		['din-opening-3', h(2.1), [-12, 12]],
		['aisc-plumb', h(3.658), [-7.316, 7.316]],
		['aisc-rods', h(1), [-3.175, 3.175]],
	] as const)('%s of an element of %o allows %o', (id, sizesM, limitsMm) => {
		const { rule } = all.find((one) => one.rule.id === id)!;
		const got = evaluateLimits(rule, sizesM, false);
		expect('limitsMm' in got && got.limitsMm).toEqual(limitsMm.map((limit) => expect.closeTo(limit, 9)));
	});

	it('meet at the ends of their bands without a gap', () => {
		const levels = all.map(({ rule }) => rule).filter(({ id }) => id.startsWith('din-level'));
		const at = (height: number) =>
			matchRule(levels, {
				class: 'IfcSlab',
				characteristic: 'level',
				storey: '',
				tag: '',
				mark: '',
				stage: 'as-cast',
				sizesM: { height, length: null, thickness: null },
			}).rule?.id;
		expect([0.2, 1, 1.001, 3, 6, 6.5, 15, 30, 31].map(at)).toEqual([
			'din-level-1',
			'din-level-1',
			'din-level-3',
			'din-level-3',
			'din-level-6',
			'din-level-15',
			'din-level-15',
			'din-level-30',
			undefined,
		]);
	});

	it.skipIf(!existsSync(papers))('are those of the reference papers that were read in a text (skipped where the papers are absent)', () => {
		const paper = JSON.parse(readFileSync(papers, 'utf8')) as Paper;
		const anySize = { height: 20, length: 20, thickness: 20 };
		for (const { rule, published } of all) {
			const row = paper.tolerances.find(({ what, source }) => what === published && source.startsWith('found'));
			const gauge = paper.flatnessDIN18202Table3.rows.find(({ line, distanceM }) => line === published && distanceM === rule.straightedgeM);
			// The distances of rods in a group stand in the trade's notes alone.
			if (rule.id === 'aisc-rods') continue;
			expect(row ?? gauge, published).toBeDefined();
			if (row === undefined) {
				expect([rule.lowerMm, rule.upperMm]).toEqual([null, gauge!.gaugeMm]);
				continue;
			}
			const sides = [rule.lowerMm, rule.upperMm].map((limit) => evaluateLimit(limit, anySize));
			const upper = evaluateLimit(row.upperMm, anySize);
			const lower = evaluateLimit(row.reading === undefined ? row.lowerMm : ({ minus: row.lowerMm } as Limit), anySize);
			const figure = (side: ReturnType<typeof evaluateLimit>) => ('limitMm' in side ? expect.closeTo(side.limitMm!, 9) : side);
			expect(sides, published).toEqual([{ limitMm: figure(lower) }, { limitMm: figure(upper) }]);
		}
	});
});
