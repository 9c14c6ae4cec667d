import { rejudge } from '../check/rejudge.ts';
import { canonicalJson } from './canonical-json.ts';
import { bytesOfHex, type TrustedKey } from './public-key.ts';
import type { RecordFile } from './read-record-file.ts';
import type { DecisionBody, SealedRecord } from './sealed-record.ts';
import { sha256OfJson } from './sha256.ts';
import { type StrictEd25519, strictEd25519 } from './strict-ed25519.ts';

/** What `verify` answers; the shape is the command line's contract. */
export interface Verification {
	readonly genuine: boolean;
	/** Of the newest record. */
	readonly signedBy: string | null;
	readonly signedAt: string | null;
	readonly statement: string | null;
	readonly previous: string | null;
	readonly head: string | null;
	/** Whether the file extends the head held from earlier; null where none was given. */
	readonly extendsHead: boolean | null;
	/** Each a sentence; of a genuine one what was found true, else what is wrong. */
	readonly reasons: readonly string[];
}

interface VerifyOptions {
	readonly keys: readonly TrustedKey[];
	/** A head held from earlier, lower-case hexadecimal. */
	readonly head?: string | null;
	readonly ed25519?: StrictEd25519;
}

/** Conformities agree to this: the exponential of another engine may differ in its last digits, a verdict may not. */
const conformitySlack = 1e-9;
/** No more reasons than a person reads; the rest are counted. */
const mostReasons = 50;

/**
 * Verifies what was read from a file with the keys given, and with nothing else: no server, no clock, no key out of the record itself.
 * Signature of each record, order and gaps of the chain, every verdict anew from its figures, and whether it extends an earlier head.
 */
export async function verifyRecords(
	file: Exclude<RecordFile, { kind: 'other' }>,
	{ keys, head = null, ed25519 = strictEd25519 }: VerifyOptions,
): Promise<Verification> {
	if (file.kind === 'broken') {
		const nothing = { signedBy: null, signedAt: null, statement: null, previous: null, head: null };
		return { genuine: false, ...nothing, extendsHead: head === null ? null : false, reasons: file.faults };
	}
	const { records } = file;
	const faults = [...file.faults];
	const usable = keys.filter((key) => {
		const whyNot = ed25519.whyNoKey(key.point);
		if (whyNot !== null) faults.push(`The key ${shortHash(key.sha256)} is refused: ${whyNot}`);
		return whyNot === null;
	});
	if (keys.length === 0) faults.push('No key was given, so nothing can be proved.');
	const hashes: string[] = [];
	for (const record of records) {
		hashes.push(await sha256OfJson(record));
		faults.push(...sealFaults(record, usable, ed25519), ...bodyFaults(record));
	}
	faults.push(...chainFaults(records, hashes, file.kind === 'chain'));
	const extendsHead = head === null ? null : isExtended(records, hashes, head);
	if (extendsHead === false) faults.push(headFault(file.kind, head ?? ''));
	const newest = records.at(-1);
	return {
		genuine: faults.length === 0,
		signedBy: newest?.body.signer.name ?? null,
		signedAt: newest?.body.signedAt ?? null,
		statement: newest?.body.statement ?? null,
		previous: newest?.body.previous ?? null,
		head: hashes.at(-1) ?? null,
		extendsHead,
		reasons: faults.length === 0 ? goodReasons(records, file.kind, extendsHead) : cutShort(faults),
	};
}

function sealFaults({ body, seal }: SealedRecord, keys: readonly TrustedKey[], ed25519: StrictEd25519): string[] {
	const message = new TextEncoder().encode(canonicalJson(body));
	const signature = bytesOfHex(seal.signature);
	const named = keys.find(({ sha256 }) => sha256 === seal.keySha256);
	if (named === undefined)
		return keys.length === 0
			? [`${nameOf(body)} is signed by a key that was not given.`]
			: [`${nameOf(body)} is signed by key ${shortHash(seal.keySha256)}, which is none of those given.`];
	if (ed25519.isSigned({ point: named.point, message, signature })) return [];
	return [`${nameOf(body)}: the signature is not that of this text by key ${shortHash(named.sha256)}. Text or signature was changed.`];
}

function bodyFaults({ body }: SealedRecord): string[] {
	return body.act === 'withdrawn' ? [] : [...verdictFaults(body), ...wholeFaults(body)];
}

/** Every verdict once more from the figures that stand beside it, by the product's own rules. */
function verdictFaults(body: DecisionBody): string[] {
	return body.shown.checkpoints.flatMap((point) => {
		const name = `${nameOf(body)}: ${point.label}`;
		const unlike = `${name} says ${point.verdict}`;
		if (point.deviationMm === null || point.limitsMm === null) {
			const expected = point.deviationMm === null ? 'not-measured' : 'no-tolerance';
			return point.verdict === expected ? [] : [`${unlike}; its figures say ${expected}.`];
		}
		if (point.decision === null) return [`${name} has figures and no rule of decision.`];
		if (point.limitsMm[0] !== null && point.limitsMm[1] !== null && point.limitsMm[0] > point.limitsMm[1])
			return [`${name} has a lower limit above the upper one.`];
		const again = rejudge(point, point.decision);
		if (again.verdict !== point.verdict) return [`${unlike}; its figures say ${again.verdict}.`];
		return isNear(again.conformity, point.conformity) ? [] : [`${name} states a conformity that its figures do not give.`];
	});
}

/** What a decision says of itself must agree: the release of what is not ready, or conditions where there are none. */
function wholeFaults(body: DecisionBody): string[] {
	const { act, conditions, shown } = body;
	const faults: string[] = [];
	if (act !== 'refused' && !shown.isReady) faults.push(`${nameOf(body)} releases what it shows as not ready.`);
	if ((act === 'released-with-conditions') !== conditions.length > 0)
		faults.push(`${nameOf(body)}: its act and its ${conditions.length} conditions do not agree.`);
	const elements = new Set(shown.elements.map(({ modelId, globalId }) => `${modelId} ${globalId}`));
	const strange = [...shown.checkpoints, ...shown.leftOut].filter(({ modelId, globalId }) => !elements.has(`${modelId} ${globalId}`));
	if (strange.length > 0) faults.push(`${nameOf(body)} has ${strange.length} checkpoints of elements that are not in the pour.`);
	return faults;
}

function isNear(one: number | null, other: number | null): boolean {
	if (one === null || other === null) return one === other;
	return Math.abs(one - other) <= conformitySlack;
}

/** Numbered without a gap, each naming the one before, all of one site; withdrawals and supersessions of what stands earlier in the chain. */
function chainFaults(records: readonly SealedRecord[], hashes: readonly string[], isChain: boolean): string[] {
	const faults: string[] = [];
	const first = records[0];
	if (isChain && first !== undefined && (first.body.sequence !== 1 || first.body.previous !== null))
		faults.push(`The chain begins with record ${first.body.sequence}; what was before it is missing.`);
	if (!isChain && first !== undefined && (first.body.sequence === 1) !== (first.body.previous === null))
		faults.push(
			`${nameOf(first.body)} is numbered ${first.body.sequence} and ${first.body.previous === null ? 'names none' : 'names one'} before it.`,
		);
	const ids = new Set<string>();
	records.forEach(({ body }, index) => {
		if (ids.has(body.recordId)) faults.push(`${nameOf(body)} stands in the chain twice.`);
		ids.add(body.recordId);
		const referred = body.act === 'withdrawn' ? body.withdraws : body.supersedes;
		if (isChain && referred !== null && !hashes.slice(0, index).includes(referred))
			faults.push(`${nameOf(body)} speaks of a record that does not stand before it.`);
		const before = records[index - 1];
		if (before === undefined) return;
		if (body.site.siteId !== before.body.site.siteId) faults.push(`${nameOf(body)} is of another site than the one before.`);
		if (body.sequence !== before.body.sequence + 1)
			faults.push(
				body.sequence > before.body.sequence
					? `Between records ${before.body.sequence} and ${body.sequence} something is missing.`
					: `Record ${body.sequence} stands after record ${before.body.sequence}: the order was changed.`,
			);
		if (body.previous !== hashes[index - 1]) faults.push(`${nameOf(body)} does not follow the record that stands before it.`);
		if (Date.parse(body.signedAt) < Date.parse(before.body.signedAt))
			faults.push(`${nameOf(body)} is signed earlier than the one before it.`);
	});
	return faults;
}

function isExtended(records: readonly SealedRecord[], hashes: readonly string[], head: string): boolean {
	return hashes.includes(head) || records[0]?.body.previous === head;
}

function headFault(kind: 'record' | 'chain', head: string): string {
	return kind === 'chain'
		? `The chain does not extend the head ${shortHash(head)} held from earlier: its past was written anew, or it is another site's.`
		: `This one record does not show that it extends the head ${shortHash(head)}. Bring the whole chain.`;
}

function goodReasons(records: readonly SealedRecord[], kind: 'record' | 'chain', extendsHead: boolean | null): string[] {
	const points = records.reduce((sum, { body }) => sum + (body.act === 'withdrawn' ? 0 : body.shown.checkpoints.length), 0);
	const subject = kind === 'chain' ? `All ${records.length} records are` : 'The record is';
	return [
		`${subject} signed by a key that was given, and unchanged.`,
		`All ${points} verdicts follow from the figures beside them.`,
		...(kind === 'chain' ? ['The chain is whole: numbered from 1, each record naming the one before.'] : []),
		...(extendsHead === true ? ['It extends the head held from earlier.'] : []),
	];
}

function cutShort(faults: readonly string[]): string[] {
	return faults.length <= mostReasons ? [...faults] : [...faults.slice(0, mostReasons), `… and ${faults.length - mostReasons} more.`];
}

function nameOf({ sequence }: { sequence: number }): string {
	return `Record ${sequence}`;
}

/** Enough of a hash for the eye. */
function shortHash(sha256: string): string {
	return `${sha256.slice(0, 12)}…`;
}
