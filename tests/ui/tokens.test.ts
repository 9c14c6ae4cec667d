import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { allSights, contrast, deltaE, labOf, linearOf } from './colour-science.ts';

const css = readFileSync(new URL('../../src/app/app.css', import.meta.url), 'utf8');

/** The colours that a block of app.css declares. */
function coloursIn(blockStart: string): Record<string, string> {
	const from = css.indexOf(blockStart);
	expect(from, blockStart).toBeGreaterThan(-1);
	const block = css.slice(from, css.indexOf('}', from));
	return Object.fromEntries([...block.matchAll(/--color-([a-z-]+): (#[0-9a-f]{6});/g)].map((match) => [match[1]!, match[2]!]));
}

const light = coloursIn('@theme static');
const sets = {
	light,
	dark: { ...light, ...coloursIn(':root[data-set="dark"] {') },
	sun: { ...light, ...coloursIn(':root[data-set="sun"] {') },
} as const;

/** DESIGN's table, so that the tokens cannot drift from it. */
const drawn = {
	light: {
		ground: '#F6F4EE',
		sheet: '#FFFFFF',
		ink: '#1B2430',
		second: '#56606B',
		rule: '#D8D3C7',
		action: '#1E3A5C',
		string: '#F2BE1A',
		within: '#1E5D54',
		proud: '#9E3C09',
		shy: '#6B4FA0',
		close: '#BD820F',
		unseen: '#828F98',
	},
	dark: {
		ground: '#12181F',
		sheet: '#1B232C',
		ink: '#ECE9E1',
		second: '#A9B1BA',
		rule: '#36414C',
		action: '#9BBCE2',
		string: '#F2BE1A',
		within: '#8BD4C4',
		proud: '#E5633D',
		shy: '#C3AFEE',
		close: '#F3D770',
		unseen: '#6E7B84',
	},
	sun: { ground: '#FFFFFF', sheet: '#FFFFFF', ink: '#000000', second: '#000000', rule: '#000000', action: '#000000', string: '#F2BE1A' },
} as const;

const verdictTokens = ['within', 'proud', 'shy', 'close', 'unseen'];
const pairs = verdictTokens.flatMap((a, index) => verdictTokens.slice(index + 1).map((b) => [a, b] as const));

describe('the colour arithmetic', () => {
	it('gives the published CIELAB values of sRGB red and of white', () => {
		const [l, a, b] = labOf(linearOf('#ff0000'));
		expect([l, a, b].map((value) => Math.round(value * 10) / 10)).toEqual([53.2, 80.1, 67.2]);
		expect(Math.round(labOf(linearOf('#ffffff'))[0])).toBe(100);
		expect(contrast('#000000', '#ffffff')).toBeCloseTo(21, 6);
		// A pair that everybody knows to fail for one sight and not for another.
		expect(deltaE('#d7191c', '#1a9641', 'deutan')).toBeLessThan(deltaE('#d7191c', '#1a9641', 'normal') / 2);
	});
});

describe.each(Object.entries(sets))('the %s set', (name, colours) => {
	it('has the colours of the design', () => {
		for (const [token, colour] of Object.entries(drawn[name as keyof typeof drawn]))
			expect(colours[token], token).toBe(colour.toLowerCase());
	});

	it.each(allSights)('keeps the five verdicts ΔE 22 apart for %s sight', (sight) => {
		for (const [a, b] of pairs) expect(deltaE(colours[a]!, colours[b]!, sight), `${a} and ${b}`).toBeGreaterThanOrEqual(22);
	});

	it('has text at 4.5:1 or more on what it stands on', () => {
		for (const under of ['ground', 'sheet', 'hair'] as const) {
			// In the sun set `hair` is a line's ink and nothing stands on it.
			if (under === 'hair' && name === 'sun') continue;
			for (const text of ['ink', 'second', 'action'])
				expect(contrast(colours[text]!, colours[under]!), `${text} on ${under}`).toBeGreaterThanOrEqual(4.5);
		}
		for (const under of ['ground', 'sheet']) {
			for (const text of ['proud-word', 'shy-word'])
				expect(contrast(colours[text]!, colours[under]!), `${text} on ${under}`).toBeGreaterThanOrEqual(4.5);
		}
		expect(contrast(colours['on-action']!, colours.action!)).toBeGreaterThanOrEqual(4.5);
	});

	it('has glyphs and the edges of inputs at 3:1 or more', () => {
		for (const under of ['ground', 'sheet']) {
			for (const glyph of ['within', 'proud', 'shy', 'close', 'unseen', 'glyph-ring', 'glyph-diamond', 'glyph-dash', 'field']) {
				expect(contrast(colours[glyph]!, colours[under]!), `${glyph} on ${under}`).toBeGreaterThanOrEqual(3);
			}
		}
	});

	it('has the string told from its ink edges', () => {
		expect(contrast(colours.string!, colours.ink!), 'the core shows between its edges').toBeGreaterThan(name === 'dark' ? 1.3 : 3);
	});
});
