import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckDetail } from '#shared/check/contract.ts';
import { counted } from '#src/lib/format.ts';

/** INTERIM until the shared words are there. */
export function headlineWords(check: CheckDetail): string {
	const off = new Set(check.deviations.filter((row) => row.verdict === 'outside').map((row) => row.elementId)).size;
	const close = check.summary['too-close-to-call'] ?? 0;
	const unseen = check.summary['not-measured'] ?? 0;
	if (off + close + unseen === 0) return 'All within';
	return `${counted(off, 'element')} off, ${counted(close, 'point')} too close, ${unseen} not seen`;
}

/** INTERIM */
export function elementPhrase(rows: readonly Deviation[]): string {
	return rows.some((row) => row.verdict === 'outside') ? 'off' : '';
}
