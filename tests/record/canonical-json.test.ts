import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonicalJson } from '#shared/record/canonical-json.ts';
import { sha256Of, sha256OfJson } from '#shared/record/sha256.ts';
import figures from './rfc8785-figures.json' with { type: 'json' };

const utf8Hex = (text: string) => Buffer.from(text, 'utf8').toString('hex');

describe('canonical JSON', () => {
	it.each(figures.examples)('writes the published bytes of $name', ({ inputText, canonicalUtf8Hex }) => {
		expect(utf8Hex(canonicalJson(JSON.parse(inputText)))).toBe(canonicalUtf8Hex);
	});

	it.each(figures.numbers)('writes the number with bits %s as %s', (bits, text) => {
		const view = new DataView(new ArrayBuffer(8));
		view.setBigUint64(0, BigInt(`0x${bits}`));
		expect(canonicalJson(view.getFloat64(0))).toBe(text);
	});

	it('reads back to the same value and does not depend on the order of properties', () => {
		fc.assert(
			fc.property(fc.jsonValue({ maxDepth: 4 }), (value) => {
				const text = canonicalJson(value);
				expect(canonicalJson(JSON.parse(text))).toBe(text);
				expect(canonicalJson(turnedRound(value))).toBe(text);
				expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify(value)));
			}),
		);
	});

	it('leaves out what is undefined and refuses what has no text', () => {
		expect(canonicalJson({ b: 1, a: undefined })).toBe('{"b":1}');
		const withoutText = [Number.NaN, Infinity, '\ud800', { a: ['\udc00'] }, [undefined], new Date(0), new Map(), 1n, undefined, () => 1];
		for (const value of withoutText) expect(() => canonicalJson(value)).toThrow(TypeError);
	});
});

describe('SHA-256', () => {
	it('is the published digest of "abc" (FIPS 180-4) and agrees with another implementation', async () => {
		expect(await sha256Of(new TextEncoder().encode('abc'))).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad');
		await fc.assert(
			fc.asyncProperty(fc.uint8Array({ maxLength: 300 }), async (bytes) => {
				expect(await sha256Of(new Uint8Array(bytes))).toBe(createHash('sha256').update(bytes).digest('hex'));
			}),
		);
	});

	it('of a value is that of its canonical text', async () => {
		const digest = createHash('sha256').update('{"a":[1,"é"],"b":0}', 'utf8').digest('hex');
		expect(await sha256OfJson({ b: -0, a: [1, 'é'] })).toBe(digest);
	});
});

/** The same value with the properties of every object the other way round. */
function turnedRound(value: unknown): unknown {
	if (Array.isArray(value)) return value.map(turnedRound);
	if (typeof value !== 'object' || value === null) return value;
	const pairs = Object.entries(value).map(([key, entry]) => [key, turnedRound(entry)] as const);
	return Object.fromEntries(pairs.reverse());
}
