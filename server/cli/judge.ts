import type { z } from 'zod';
import { boxJudgement, discJudgement, type Judgement, lineJudgement } from '#shared/check/judge-schema.ts';
import { judge } from '#shared/check/verdict.ts';

interface Refusal {
	readonly code: 'bad-input' | 'not-finite';
	readonly message: string;
	readonly where?: string;
}

/** Where in a JSON value a number stands that is none: overflow reads as infinity, and NaN or Infinity come as text. */
function findNotFinite(value: unknown, path: string): string | null {
	if (typeof value === 'number') return Number.isFinite(value) ? null : path;
	if (typeof value === 'string') return /^\s*[+-]?(nan|inf(inity)?)\s*$/i.test(value) ? path : null;
	if (typeof value !== 'object' || value === null) return null;
	for (const [key, part] of Object.entries(value)) {
		const found = findNotFinite(part, Array.isArray(value) ? `${path}[${key}]` : path === '' ? key : `${path}.${key}`);
		if (found !== null) return found;
	}
	return null;
}

/** NaN and Infinity are no JSON; written bare (as some programs do) they are told apart from a text that is broken otherwise. */
const bareNotFinite = /[:[,]\s*[+-]?(NaN|Infinity|inf|nan)\s*[,\]}]/;

function pathOf(issue: z.core.$ZodIssue): string {
	return issue.path
		.map((part) => (typeof part === 'number' ? `[${part}]` : String(part)))
		.join('.')
		.replaceAll('.[', '[');
}

function read(text: string): { input: Judgement } | { refusal: Refusal } {
	let value: unknown;
	try {
		value = JSON.parse(text);
	} catch {
		if (bareNotFinite.test(text)) return { refusal: { code: 'not-finite', message: 'A number is NaN or infinite.' } };
		return { refusal: { code: 'bad-input', message: text.trim() === '' ? 'The input is empty.' : 'The input is not JSON.' } };
	}
	const notFinite = findNotFinite(value, '');
	if (notFinite !== null)
		return { refusal: { code: 'not-finite', message: `${notFinite || 'The input'} is not a finite number.`, where: notFinite } };
	if (typeof value !== 'object' || value === null || Array.isArray(value)) {
		return { refusal: { code: 'bad-input', message: 'The input must be one object.' } };
	}
	const isPlan = 'offsetMm' in value || 'radiusMm' in value || ('characteristic' in value && value.characteristic === 'plan');
	const schema = isPlan ? ('boxYawRad' in value ? boxJudgement : discJudgement) : lineJudgement;
	const parsed = schema.safeParse(value);
	if (parsed.success) return { input: parsed.data };
	const issue = parsed.error.issues[0]!;
	const where = pathOf(issue);
	return { refusal: { code: 'bad-input', message: `${where || 'The input'}: ${issue.message}.`, ...(where === '' ? {} : { where }) } };
}

/** The command `judge` of the command line: the text of one judgement in, the exit code and what to print as JSON out. Millimetres. */
export function runJudge(text: string): { exitCode: number; output: unknown } {
	const outcome = read(text);
	if ('refusal' in outcome) return { exitCode: 2, output: { error: outcome.refusal } };
	const { verdict, conformity } = judge(outcome.input);
	return { exitCode: 0, output: { verdict, conformity } };
}
