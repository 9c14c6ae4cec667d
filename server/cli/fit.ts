import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitRefusal } from '#shared/fit/fit-schema.ts';
import { readFitInput } from '#shared/fit/read-fit-input.ts';

/**
 * The command line's `fit`: JSON text in, the answer and the exit code out (0 done, 2 the input is refused).
 * 1e999 is valid JSON and reads as infinity; it is refused as not-finite.
 */
export function runFit(text: string): { exitCode: number; output: unknown } {
	let value: unknown;
	try {
		value = JSON.parse(text);
	} catch (error) {
		return refused({ code: 'bad-input', message: `The input is not JSON: ${error instanceof Error ? error.message : String(error)}` });
	}
	const read = readFitInput(value);
	if (!read.ok) return refused(read.refusal);
	const outcome = computeFit(read.input);
	return outcome.ok ? { exitCode: 0, output: outcome.result } : refused(outcome.refusal);
}

function refused(refusal: FitRefusal): { exitCode: number; output: unknown } {
	return { exitCode: 2, output: { error: refusal } };
}
