import { ORPCError } from '@orpc/client';

/** A refusal in words, ready to be shown. */
export interface Refusal {
	/** The contract's code, `NO_LINE` where the server was not reached, `FAULT` for a fault of ours. */
	code: string;
	/** What happened and what to do. */
	message: string;
	/** The field it speaks of, where the server named one. */
	where: string | null;
}

const faultMessage = 'The fault is on our side. Nothing was changed. Try again; if it stays, tell whoever runs this server, with the time.';
const noLineMessage = 'The server was not reached. Nothing was changed; what you typed is kept. Try again when there is a line.';

/** The contract's code of an error, or null where it is none of the contract's. */
export function errorCode(error: unknown): string | null {
	return error instanceof ORPCError ? String(error.code) : null;
}

/** Any thrown thing as a refusal a person can read. Validation faults name the first field. */
export function refusalOf(error: unknown): Refusal {
	if (error instanceof ORPCError) {
		const where = fieldOf(error.data);
		if (error.code === 'BAD_REQUEST') return { code: 'BAD_REQUEST', message: firstIssue(error.data) ?? error.message, where };
		if (error.code === 'INTERNAL_SERVER_ERROR' || error.status >= 500) return { code: 'FAULT', message: faultMessage, where: null };
		return { code: String(error.code), message: error.message, where };
	}
	// fetch throws a TypeError where no answer came at all.
	if (error instanceof TypeError && /fetch|network|load failed/i.test(error.message))
		return { code: 'NO_LINE', message: noLineMessage, where: null };
	return { code: 'FAULT', message: faultMessage, where: null };
}

function fieldOf(data: unknown): string | null {
	if (typeof data !== 'object' || data === null) return null;
	if ('where' in data && typeof data.where === 'string') return data.where;
	const issue = issuesOf(data)[0];
	return issue?.path && issue.path.length > 0 ? issue.path.map(String).join('.') : null;
}

function firstIssue(data: unknown): string | null {
	return issuesOf(data)[0]?.message ?? null;
}

function issuesOf(data: unknown): { message: string; path?: unknown[] }[] {
	if (typeof data !== 'object' || data === null || !('issues' in data) || !Array.isArray(data.issues)) return [];
	return data.issues.flatMap((issue: unknown) => {
		if (typeof issue !== 'object' || issue === null || !('message' in issue) || typeof issue.message !== 'string') return [];
		// A path that is no list names no field.
		const path = 'path' in issue && Array.isArray(issue.path) ? issue.path : [];
		return [{ message: issue.message, path }];
	});
}
