import { oc } from '@orpc/contract';
import { z } from 'zod';
import type { Permission } from './permissions.ts';

/** Every procedure names its permission; the guard refuses one that names none. Messages are what the person reads. */
export const base = oc.$meta<{ permission?: Permission }>({}).errors({
	UNAUTHORIZED: { status: 401, message: 'Sign in first.' },
	FORBIDDEN: {
		status: 403,
		message: 'Your role on this site does not allow this.',
	},
	NOT_FOUND: {
		status: 404,
		message: 'There is no such thing here, or it is not yours to see.',
	},
	REFUSED: {
		status: 422,
		message: 'This cannot be done.',
		data: z.object({ code: z.string(), where: z.string().optional() }),
	},
	CONFLICT: {
		status: 409,
		message: 'Someone was quicker. Look again, then decide.',
	},
});

/** Strict, and so is all that extends it: what nobody asked for is refused. */
export const siteInput = z.strictObject({ siteId: z.uuid() });

/** A text a person typed: trimmed, no control characters. */
export const plainText = (maximum: number) =>
	z
		.string()
		.trim()
		.min(1, 'Say something here.')
		.max(maximum, `At most ${maximum} characters.`)
		.regex(/^[^\p{Cc}\u202a-\u202e\u2066-\u2069]*$/u, 'Control characters are not allowed here.');
