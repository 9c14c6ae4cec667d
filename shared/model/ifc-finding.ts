import type { Finding } from '../fit/fit-schema.ts';

/** A finding about a model file. `names` are GlobalIds, marks or entity numbers it speaks of (at most 50 are kept). */
export function modelFinding(
	code: string,
	message: string,
	evidence: Record<string, unknown> = {},
	names: readonly string[] = [],
): Finding {
	return { code, pairs: names.slice(0, 50), message, evidence };
}
