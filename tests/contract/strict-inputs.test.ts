import { isContractProcedure } from '@orpc/contract';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { contract } from '#shared/contract.ts';

/** The inputs of all routes by their path; undefined where a route takes none. */
function inputsOf(node: object, path: string[] = []): [string, unknown][] {
	if (isContractProcedure(node)) return [[path.join('.'), node['~orpc'].inputSchema]];
	return Object.entries(node).flatMap(([key, child]) => inputsOf(child, [...path, key]));
}

/** Where within a schema an object lets unknown fields pass, or drops them without a word. */
function looseIn(schema: unknown, path: string, seen = new Set<unknown>()): string[] {
	if (typeof schema !== 'object' || schema === null || seen.has(schema)) return [];
	seen.add(schema);
	if (!(schema instanceof z.core.$ZodType)) return [];
	const { def } = schema._zod;
	if (schema instanceof z.core.$ZodObject) {
		const { catchall, shape } = schema._zod.def;
		const isStrict = catchall instanceof z.core.$ZodNever;
		return [...(isStrict ? [] : [path]), ...Object.entries(shape).flatMap(([key, child]) => looseIn(child, `${path}.${key}`, seen))];
	}
	const children = Object.entries(def).flatMap(([key, value]) =>
		Array.isArray(value) ? value.map((one) => [key, one] as const) : [[key, value] as const],
	);
	return children.flatMap(([, child]) => looseIn(child, path, seen));
}

/** WebAuthn's own extensions are for the browser's library to fill; nothing of ours reads them. */
const readByNobody = /\.clientExtensionResults$/;

describe('the inputs of the contract', () => {
	it('are strict through and through: a field that nobody asked for is refused, not dropped', () => {
		const loose = inputsOf(contract)
			.flatMap(([path, schema]) => looseIn(schema, path))
			.filter((path) => !readByNobody.test(path));
		expect(loose.join('\n')).toBe('');
	});

	it('are looked into: a loose object within an array within a union would be found', () => {
		const nested = z.strictObject({ list: z.array(z.union([z.string(), z.object({ a: z.string() })])).optional() });
		expect(looseIn(nested, 'x')).toEqual(['x.list']);
	});
});
