import { canonicalJson } from './canonical-json.ts';
import { hexOf } from './public-key.ts';
import { type RecordBody, recordForm, type SealedRecord } from './sealed-record.ts';

/** Seals a body: `sign` is Ed25519 over the bytes it is handed. `text` is the record's one text; its SHA-256 is the chain's new head. */
export function sealRecord(
	body: RecordBody,
	{ keySha256, sign }: { keySha256: string; sign: (message: Uint8Array) => Uint8Array },
): { record: SealedRecord; text: string } {
	const signature = hexOf(sign(new TextEncoder().encode(canonicalJson(body))));
	const record: SealedRecord = { form: recordForm, body, seal: { algorithm: 'Ed25519', keySha256, signature } };
	return { record, text: canonicalJson(record) };
}
