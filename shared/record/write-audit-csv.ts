import type { AuditLine } from './contract.ts';

const head = ['time (UTC)', 'who', 'as', 'act', 'thing', 'from', 'details'];

/** The audit trail as CSV (RFC 4180), CRLF, one line an entry. A cell that a spreadsheet would compute begins with an apostrophe. */
export function writeAuditCsv(entries: readonly AuditLine[]): string {
	const lines = entries.map(({ at, who, roles, kind, subjectId, address, data }) => [
		at.toISOString(),
		who?.name ?? '',
		roles.join(' '),
		kind,
		subjectId ?? '',
		address ?? '',
		JSON.stringify(data),
	]);
	return [head, ...lines].map((cells) => `${cells.map(cellOf).join(',')}\r\n`).join('');
}

function cellOf(text: string): string {
	const safe = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
	return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
