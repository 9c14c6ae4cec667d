import type { AuditLine } from '#shared/record/contract.ts';

/** "fit adopted", "member invited": the kind's own words. */
export function kindWords(kind: string): string {
	const words = kind.replaceAll('-', ' ');
	return words.charAt(0).toUpperCase() + words.slice(1);
}

/** What of an entry's details says something in a line: names, numbers, reasons; ids and hashes stay in the file. Pure. */
export function detailWords(data: AuditLine['data']): string {
	return Object.entries(data)
		.flatMap(([key, value]) => {
			const text = textOf(value);
			return text === null ? [] : [`${wordsOf(key)} ${text}`];
		})
		.join(' · ');
}

const idPattern = /^([0-9a-f]{8}-[0-9a-f-]{27}|[0-9a-f]{32,64})$/;

function textOf(value: unknown): string | null {
	if (value === null || value === undefined) return null;
	if (typeof value === 'boolean') return value ? 'yes' : 'no';
	if (typeof value === 'number') return String(value);
	if (typeof value === 'string') return value === '' || idPattern.test(value) ? null : value;
	if (Array.isArray(value)) {
		const texts = value.map(textOf).filter((text) => text !== null);
		return texts.length === 0 ? null : texts.join(', ');
	}
	return null;
}

/** "companyName" → "company name", "isLead" → "lead". */
function wordsOf(key: string): string {
	return key
		.replace(/^is(?=[A-Z])/, '')
		.replaceAll(/([a-z0-9])([A-Z])/g, '$1 $2')
		.toLowerCase();
}
