import { isContractProcedure } from '@orpc/contract';
import { z } from 'zod';
import type { Permission } from '#shared/permissions.ts';

/** One route of the contract as a walker needs it. */
export interface WalkedRoute {
	path: string;
	permission: Permission;
	input: z.ZodType | undefined;
}

/** All routes, from the contract itself: a new one is walked without being named anywhere. */
export function routesOf(node: object, path: string[] = []): WalkedRoute[] {
	if (!isContractProcedure(node)) return Object.entries(node).flatMap(([key, child]) => routesOf(child, [...path, key]));
	const { meta, inputSchema } = node['~orpc'];
	const { permission } = meta as { permission: Permission };
	return [{ path: path.join('.'), permission, input: inputSchema as z.ZodType | undefined }];
}

const fallbacks: Record<string, unknown> = {
	email: 'somebody@example.com',
	surveyedOn: '2026-11-26',
	token: 'x'.repeat(43),
	mark: 'C/3',
	timeZone: 'UTC',
	startsAt: '07:00',
	endsAt: '17:00',
};

/** Whole inputs that no value alone makes: one of several true, and two things where one is too few. */
const wholes: Record<string, (made: unknown) => unknown> = {
	kinds: () => ({ plan: true, face: true, level: true }),
	setups: (made) => (Array.isArray(made) ? [made[0], made[0]] : made),
};

/**
 * An input that the schema takes, with each id from `ids` by its field's name: what somebody would send who had got hold of them. Null
 * where no such input was found: the caller counts those.
 */
export function sampleInput(schema: z.ZodType | undefined, ids: Readonly<Record<string, string>>): unknown {
	if (schema === undefined) return {};
	const made = sampleOf(schema, '', ids);
	return schema.safeParse(made).success ? made : null;
}

function sampleOf(schema: z.core.$ZodType, name: string, ids: Readonly<Record<string, string>>): unknown {
	const made = plainSampleOf(schema, name, ids);
	if (made === undefined || z.safeParse(schema, made).success) return made;
	return wholes[name]?.(made) ?? made;
}

function plainSampleOf(schema: z.core.$ZodType, name: string, ids: Readonly<Record<string, string>>): unknown {
	const inner = (one: unknown, as = name) => sampleOf(one as z.core.$ZodType, as, ids);
	const { def } = schema._zod;
	const known = ids[name] ?? fallbacks[name];
	if (known !== undefined && schema instanceof z.core.$ZodString) return known;
	if (schema instanceof z.core.$ZodObject)
		return Object.fromEntries(
			Object.entries(schema._zod.def.shape)
				.map(([key, child]) => [key, inner(child, key)] as const)
				.filter(([, value]) => value !== undefined),
		);
	if (schema instanceof z.core.$ZodOptional || schema instanceof z.core.$ZodDefault)
		return known === undefined ? undefined : inner(schema._zod.def.innerType);
	if (schema instanceof z.core.$ZodNullable) return known === undefined ? null : inner(schema._zod.def.innerType);
	if (schema instanceof z.core.$ZodArray) return [inner(schema._zod.def.element, name.replace(/s$/, ''))];
	if (schema instanceof z.core.$ZodUnion) return inner(schema._zod.def.options[0]);
	if (schema instanceof z.core.$ZodEnum) return Object.values(schema._zod.def.entries)[0];
	if (schema instanceof z.core.$ZodLiteral) return schema._zod.def.values[0];
	if (schema instanceof z.core.$ZodPipe) return inner(schema._zod.def.in);
	if (schema instanceof z.core.$ZodTuple) return schema._zod.def.items.map((item) => inner(item));
	if (schema instanceof z.core.$ZodRecord) return {};
	if (schema instanceof z.core.$ZodBoolean) return false;
	if (schema instanceof z.core.$ZodDate) return new Date(Date.now() + 86_400_000);
	if (schema instanceof z.core.$ZodNumber) return [1, 0, 10].find((value) => z.safeParse(schema, value).success) ?? 1;
	if (schema instanceof z.core.$ZodString)
		return (
			['a reason', '11111111-1111-4111-8111-111111111111', '2026-12-01', 'a'.repeat(64), '12:00'].find(
				(text) => z.safeParse(schema, text).success,
			) ?? 'x'
		);
	return 'type' in def && def.type === 'null' ? null : undefined;
}
