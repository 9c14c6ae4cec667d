import { createHash, createPublicKey, generateKeyPairSync, type KeyObject, sign } from 'node:crypto';
import { rejudge } from '#shared/check/rejudge.ts';
import { canonicalJson } from '#shared/record/canonical-json.ts';
import { sealRecord } from '#shared/record/seal-record.ts';
import {
	chainForm,
	type DecisionBody,
	type RecordBody,
	type RecordedCheckpoint,
	recordCaution,
	type SealedRecord,
	type WithdrawalBody,
} from '#shared/record/sealed-record.ts';

/** Records for tests, made by Node's own Ed25519 and SHA-256. Names and figures are invented. */

export interface TestSigner {
	pem: string;
	keySha256: string;
	privateKey: KeyObject;
	sign: (message: Uint8Array) => Uint8Array;
}

export function testSigner(privateKey = generateKeyPairSync('ed25519').privateKey): TestSigner {
	const publicKey = createPublicKey(privateKey);
	const der = publicKey.export({ type: 'spki', format: 'der' });
	return {
		privateKey,
		pem: publicKey.export({ type: 'spki', format: 'pem' }).toString(),
		keySha256: sha256Hex(der),
		sign: (message) => sign(null, message, privateKey),
	};
}

export const sha256Hex = (bytes: Uint8Array | string): string => createHash('sha256').update(bytes).digest('hex');

const uuid = (n: number) => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;
const hash = (text: string) => sha256Hex(text);
const modelId = uuid(900);

function checkpoint(index: number, deviationMm: number | null): RecordedCheckpoint {
	const figures = {
		deviationMm,
		offsetMm: null,
		covarianceMm2: null,
		expandedUncertaintyMm: deviationMm === null ? null : 3,
		limitsMm: [-10, 10] as [number, number],
		boxYawRad: null,
	};
	return {
		modelId,
		checkpointId: `cp-${index}`,
		globalId: 'column-c3',
		label: 'East face, 2.8 m above its base',
		characteristic: 'face',
		requirement: 'required',
		place: [12.345, 6.789, 2.8],
		direction: [1, 0, 0],
		check: deviationMm === null ? null : 4,
		decision: deviationMm === null ? null : 'guarded',
		rule: 'C1',
		measured: deviationMm === null ? null : [12.346, 6.789, 2.8],
		notMeasuredReason: deviationMm === null ? 'no point within reach' : null,
		...figures,
		...rejudge(figures, 'guarded'),
	};
}

export function decisionBodyOf(sequence: number, previous: string | null, more: Partial<DecisionBody> = {}): DecisionBody {
	return {
		recordId: uuid(sequence),
		sequence,
		previous,
		site: { siteId: uuid(1), name: 'Testfield 1', timeZone: 'Europe/Zurich', isInvented: true },
		signedAt: new Date(Date.UTC(2026, 11, 1, 8, 0, sequence)).toISOString(),
		signer: { userId: uuid(2), name: 'R. Amadi', as: ["owner's representative"], deputyFor: null, recognised: 'password, again at 08:00' },
		statement: `Released for concrete, record ${sequence} – “as shown”.`,
		engineVersion: '1',
		caution: recordCaution,
		act: 'released',
		supersedes: null,
		conditions: [],
		shown: {
			pour: {
				pourId: uuid(3),
				number: '7',
				name: 'Ground columns',
				company: 'Fennick Forms',
				plannedAt: '2026-12-04T06:00:00.000Z',
				holdPoint: 'before-pour',
				calledBy: 'Lena Fennick',
				submittedBy: 'Ida Roen',
				list: [{ question: 'Forms clean?', answer: 'yes' }],
				witnessed: [],
			},
			isFitCheckedBySecond: true,
			isReady: true,
			readiness: ['All 2 checkpoints are within.'],
			carriedOver: [],
			elements: [
				{
					modelId,
					modelName: 'Structure',
					globalId: 'column-c3',
					class: 'IfcColumn',
					mark: 'C/3',
					title: 'Column C/3, ground',
					storey: 'Ground',
					company: null,
					designSha256: hash('design'),
				},
			],
			checkpoints: [checkpoint(1, 2.5), checkpoint(2, -0.1 - 0.2)],
			leftOut: [],
			flags: [],
			checks: [],
		},
		...more,
	};
}

export function withdrawalBodyOf(sequence: number, previous: string | null, withdraws: string): WithdrawalBody {
	const { shown, act, conditions, supersedes, ...common } = decisionBodyOf(sequence, previous);
	return {
		...common,
		act: 'withdrawn',
		withdraws,
		pour: { pourId: shown.pour.pourId, number: '7', name: 'Ground columns', holdPoint: 'before-pour' },
	};
}

/** A chain of so many records: a decision, then withdrawals and decisions in turn. */
export function testChain(
	signer: TestSigner,
	length: number,
	bodyOf?: (sequence: number, previous: string | null, hashes: readonly string[]) => RecordBody,
) {
	const records: SealedRecord[] = [];
	const hashes: string[] = [];
	for (let sequence = 1; sequence <= length; sequence += 1) {
		const previous = hashes.at(-1) ?? null;
		const usual = (): RecordBody =>
			previous !== null && sequence % 10 !== 1 ? withdrawalBodyOf(sequence, previous, previous) : decisionBodyOf(sequence, previous);
		const { record, text } = sealRecord(bodyOf?.(sequence, previous, hashes) ?? usual(), signer);
		records.push(record);
		hashes.push(sha256Hex(text));
	}
	return { records, hashes, text: chainText(records) };
}

export function chainText(records: readonly SealedRecord[]): string {
	return canonicalJson({ form: chainForm, records });
}
