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

/** A figure for a sentence: at most eight significant digits, so that 0.9997300000000001 reads 0.99973. The evidence keeps all digits. */
export const figureInWords = (value: number): string => String(Number(value.toPrecision(8)) + 0);

/** "1 element has", "3 elements have". */
export const counted = (count: number, one: string, many: string): string => `${count} ${count === 1 ? one : many}`;
