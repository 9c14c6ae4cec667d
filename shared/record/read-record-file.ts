import { canonicalJson } from './canonical-json.ts';
import { chainForm, recordChain, recordForm, type SealedRecord, sealedRecord } from './sealed-record.ts';

/** What stands in a file: records in its own order, and what is already wrong with its text. */
export type RecordFile =
	| { readonly kind: 'record' | 'chain'; readonly records: readonly SealedRecord[]; readonly faults: readonly string[] }
	/** It says that it is one of ours and is not of that shape. */
	| { readonly kind: 'broken'; readonly faults: readonly string[] }
	/** No file of ours at all. */
	| { readonly kind: 'other'; readonly message: string };

/**
 * Reads a record or a chain as it was downloaded. White space between the parts is of no meaning; every other letter must stand as RFC 8785
 * writes it, so that no changed byte can hide behind another spelling of the same value (0.30000000000000004 and …05 are one double).
 */
export function readRecordFile(bytes: Uint8Array): RecordFile {
	let text: string;
	try {
		text = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes);
	} catch {
		return { kind: 'other', message: 'The file is not UTF-8 text.' };
	}
	let value: unknown;
	try {
		value = JSON.parse(text);
	} catch {
		return { kind: 'other', message: text.trim() === '' ? 'The file is empty.' : 'The file is not JSON.' };
	}
	const form = typeof value === 'object' && value !== null && 'form' in value ? value.form : null;
	if (form !== recordForm && form !== chainForm)
		return { kind: 'other', message: 'The file is no record of this product, nor a chain of them.' };
	const parsed = form === recordForm ? sealedRecord.safeParse(value) : recordChain.safeParse(value);
	if (!parsed.success) {
		const issue = parsed.error.issues[0];
		const where = issue?.path.map(String).join('.') ?? '';
		return { kind: 'broken', faults: [`${where === '' ? 'The file' : where} is not as a record has it: ${issue?.message ?? 'unknown'}.`] };
	}
	const faults = isCanonical(text, value)
		? []
		: ['The text is not in the one form that is signed (RFC 8785): it was changed, or written anew by another program.'];
	return 'records' in parsed.data
		? { kind: 'chain', records: parsed.data.records, faults }
		: { kind: 'record', records: [parsed.data], faults };
}

function isCanonical(text: string, value: unknown): boolean {
	try {
		return withoutSpace(text) === canonicalJson(value);
	} catch {
		return false;
	}
}

/** The text without the white space that stands between tokens; strings stay as they are. */
function withoutSpace(text: string): string {
	return text.replaceAll(/("(?:[^"\\]|\\.)*")|[ \t\r\n]+/g, (_, kept: string | undefined) => kept ?? '');
}
