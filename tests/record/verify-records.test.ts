import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { canonicalJson } from '#shared/record/canonical-json.ts';
import { publicKeyPem, readPublicKeys } from '#shared/record/public-key.ts';
import { readRecordFile } from '#shared/record/read-record-file.ts';
import { sealRecord } from '#shared/record/seal-record.ts';
import type { DecisionBody, RecordedCheckpoint, SealedRecord } from '#shared/record/sealed-record.ts';
import { strictEd25519 } from '#shared/record/strict-ed25519.ts';
import { type Verification, verifyRecords } from '#shared/record/verify-records.ts';
import { runVerify } from '../../server/cli/verify.ts';
import { chainText, decisionBodyOf, sha256Hex, testChain, testSigner, withdrawalBodyOf } from './sample-records.ts';

const signer = testSigner();
const folder = mkdtempSync(join(tmpdir(), 'bb-verify-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));
const pathOf = (name: string, text: string | Uint8Array): string => {
	const path = join(folder, name);
	writeFileSync(path, text);
	return path;
};
const keyFile = pathOf('key.pem', signer.pem);

async function verified(text: string, { pem = signer.pem, head = null as string | null } = {}): Promise<Verification> {
	const file = readRecordFile(new TextEncoder().encode(text));
	if (file.kind === 'other') throw new Error(file.message);
	return verifyRecords(file, { keys: await readPublicKeys(pem), head });
}

const recordText = (body = decisionBodyOf(1, null), by = signer): string => sealRecord(body, by).text;
const firstPoint =
	(change: Partial<RecordedCheckpoint>) =>
	(shown: DecisionBody['shown']): unknown =>
		Object.assign(shown.checkpoints[0]!, change);
const shownWith = (change: (shown: DecisionBody['shown']) => unknown): DecisionBody => {
	const body = structuredClone(decisionBodyOf(1, null));
	change(body.shown);
	return body;
};

describe('a record', () => {
	it('is genuine by its key alone, and says what was signed', async () => {
		const text = recordText();
		expect(await verified(text)).toMatchObject({
			genuine: true,
			signedBy: 'R. Amadi',
			signedAt: '2026-12-01T08:00:01.000Z',
			previous: null,
			head: sha256Hex(text),
			extendsHead: null,
		});
		expect(await verified(JSON.stringify(JSON.parse(text), null, '\t'))).toMatchObject({ genuine: true });
	});

	it('is not genuine with any digit changed, though the figures would be as good', async () => {
		const text = recordText();
		for (const [from, to] of [
			['2.5,', '2.6,'],
			['"released"', '"refused"'],
			['R. Amadi', 'R. Amado'],
			['0.30000000000000004', '0.30000000000000005'],
		] as const) {
			expect(text).toContain(from);
			expect(await verified(text.replace(from, to)), from).toMatchObject({ genuine: false });
		}
	});

	it('counts only under the keys given', async () => {
		const other = testSigner();
		expect(await verified(recordText(), { pem: other.pem })).toMatchObject({
			genuine: false,
			reasons: [expect.stringContaining('none of those given')],
		});
		expect(await verified(recordText(), { pem: other.pem + signer.pem })).toMatchObject({ genuine: true });
		// Naming another's key does not make it signed by it.
		const claimed = sealRecord(decisionBodyOf(1, null), { ...other, keySha256: signer.keySha256 }).text;
		expect(await verified(claimed)).toMatchObject({ genuine: false, reasons: [expect.stringContaining('signature is not')] });
	});

	it('is not genuine under a key of small order, by which anybody signs anything', async () => {
		const pem = publicKeyPem(Uint8Array.from([1, ...new Array<number>(31).fill(0)]));
		const [key] = await readPublicKeys(pem);
		const forged = sealRecord(decisionBodyOf(1, null), {
			keySha256: key!.sha256,
			sign: () => Uint8Array.from([1, ...new Array<number>(63).fill(0)]),
		});
		const verification = await verified(forged.text, { pem });
		expect(verification.genuine).toBe(false);
		expect(verification.reasons[0]).toContain('small order');
	});

	it.each<[string, (shown: DecisionBody['shown']) => unknown, RegExp]>([
		['a verdict its figures do not give', firstPoint({ deviationMm: 16 }), /says within; its figures say outside/],
		['limits that were widened after', firstPoint({ limitsMm: [-1, 1] }), /its figures say/],
		['a figure that was taken away', firstPoint({ deviationMm: null }), /its figures say not-measured/],
		['a conformity made up', firstPoint({ conformity: 0.5 }), /conformity/],
		['a release of what is not ready', (shown) => Object.assign(shown, { isReady: false }), /not ready/],
		['points of foreign elements', firstPoint({ globalId: 'other' }), /not in the pour/],
	])('is not genuine with %s, even signed by the right key', async (_, change, reason) => {
		const verification = await verified(recordText(shownWith(change)));
		expect(verification.genuine).toBe(false);
		expect(verification.reasons.join(' ')).toMatch(reason);
	});

	it('says of a broken one what is broken, and of a foreign file that it is none', async () => {
		expect(await verified(recordText().replace('"sequence":1', '"sequence":"1"'))).toMatchObject({
			genuine: false,
			reasons: [expect.stringContaining('body.sequence')],
		});
		for (const text of ['', 'x', '{}', '[]', 'null']) expect(readRecordFile(new TextEncoder().encode(text)).kind).toBe('other');
		expect(readRecordFile(Uint8Array.of(0xff)).kind).toBe('other');
	});
});

describe('a chain', () => {
	const chain = testChain(signer, 12);

	it('is genuine whole, and extends every head it had', async () => {
		expect(await verified(chain.text)).toMatchObject({ genuine: true, head: chain.hashes[11], previous: chain.hashes[10] });
		for (const head of chain.hashes) expect(await verified(chain.text, { head })).toMatchObject({ genuine: true, extendsHead: true });
	});

	it('that was written anew by the server itself does not extend the head held from before', async () => {
		const anew = testChain(signer, 12, (sequence, previous) =>
			sequence === 5 ? decisionBodyOf(5, previous, { statement: 'Something else' }) : withOwn(sequence, previous),
		);
		expect(await verified(anew.text)).toMatchObject({ genuine: true });
		const verification = await verified(anew.text, { head: chain.hashes[11]! });
		expect(verification).toMatchObject({ genuine: false, extendsHead: false, reasons: [expect.stringContaining('does not extend')] });
		expect(await verified(anew.text, { head: chain.hashes[3]! })).toMatchObject({ genuine: true, extendsHead: true });
	});

	const withOwn = (sequence: number, previous: string | null) =>
		previous === null
			? decisionBodyOf(sequence, previous)
			: sequence % 10 === 1
				? decisionBodyOf(sequence, previous)
				: withdrawalBodyOf(sequence, previous, previous);

	it.each<[string, (records: SealedRecord[]) => SealedRecord[]]>([
		['dropped', (records) => records.filter((_, index) => index !== 4)],
		['dropped at its beginning', (records) => records.slice(1)],
		['moved', (records) => [...records.slice(0, 4), records[5]!, records[4]!, ...records.slice(6)]],
		['put in twice', (records) => [...records.slice(0, 5), records[4]!, ...records.slice(5)]],
		[
			'taken from another chain',
			(records) =>
				[...records.slice(0, 4), testChain(signer, 5).records[4]!, ...records.slice(5)].with(4, testChain(testSigner(), 5).records[4]!),
		],
	])('is not genuine with a record %s', async (_, change) => {
		expect((await verified(chainText(change([...chain.records])))).genuine).toBe(false);
	});

	it('of one record alone does not show what it extends beyond the one before', async () => {
		const text = canonicalJson(chain.records[6]);
		expect(await verified(text)).toMatchObject({ genuine: true, previous: chain.hashes[5] });
		expect(await verified(text, { head: chain.hashes[5]! })).toMatchObject({ extendsHead: true });
		expect(await verified(text, { head: chain.hashes[2]! })).toMatchObject({ genuine: false, extendsHead: false });
	});

	it('is not genuine with any one byte changed (every 97th of 40 records here; all of 200 were tried once)', async () => {
		const bytes = new TextEncoder().encode(testChain(signer, 40).text);
		const keys = await readPublicKeys(signer.pem);
		for (let at = 0; at < bytes.length; at += 97) {
			const changed = bytes.slice();
			changed[at] = changed[at]! ^ (1 << (at % 7));
			const file = readRecordFile(changed);
			if (file.kind === 'other') continue;
			const { genuine } = await verifyRecords(file, { keys, ed25519: memoised });
			expect(genuine, `byte ${at}`).toBe(false);
		}
	});
});

/** Each signature is looked at once: forty others did not change. */
const seen = new Map<string, boolean>();
const memoised = {
	...strictEd25519,
	isSigned: (signed: Parameters<typeof strictEd25519.isSigned>[0]): boolean => {
		const key = sha256Hex(Buffer.concat([signed.signature, signed.message]));
		const known = seen.get(key) ?? strictEd25519.isSigned(signed);
		seen.set(key, known);
		return known;
	},
};

describe('verify of the command line', () => {
	const chain = testChain(signer, 3);

	it('answers 0, 3 and 2', async () => {
		const file = pathOf('chain.json', chain.text);
		expect(await runVerify([file, '--key', keyFile])).toMatchObject({ exitCode: 0, output: { genuine: true } });
		expect(
			await runVerify([file, '--key', pathOf('other.pem', testSigner().pem), keyFile, '--head', chain.hashes[0]!.toUpperCase()]),
		).toMatchObject({
			exitCode: 0,
			output: { extendsHead: true },
		});
		expect(await runVerify([file, '--key', keyFile, '--head', sha256Hex('x')])).toMatchObject({
			exitCode: 3,
			output: { extendsHead: false },
		});
		expect(await runVerify([pathOf('changed.json', chain.text.replace('Amadi', 'Amado')), '--key', keyFile])).toMatchObject({
			exitCode: 3,
		});
		for (const args of [
			[],
			[file],
			[file, '--key'],
			[file, '--key', join(folder, 'none.pem')],
			[file, '--key', file],
			[file, '--key', keyFile, '--head', 'x'],
			[file, '--kex', keyFile],
			[file, file, '--key', keyFile],
			[keyFile, '--key', keyFile],
			[join(folder, 'none.json'), '--key', keyFile],
		]) {
			expect(await runVerify(args), args.join(' ')).toMatchObject({ exitCode: 2, output: { error: { message: expect.any(String) } } });
		}
	});
});

describe('an independent verifier', () => {
	const text = recordText();
	const script = new URL('./verify_record.py', import.meta.url).pathname;

	it('in Python with openssl agrees, and on a changed one too', () => {
		const good = pathOf('record.json', text);
		const run = (file: string) => spawnSync('python3', [script, file, keyFile], { encoding: 'utf8' });
		expect(run(good)).toMatchObject({ status: 0, stdout: `genuine ${sha256Hex(text)}\n` });
		expect(run(pathOf('bad.json', text.replace('Amadi', 'Amado'))).status).toBe(3);
		const whole = pathOf('whole.json', testChain(signer, 4).text);
		expect(run(whole)).toMatchObject({ status: 0 });
		expect(execFileSync('sha256sum', [good], { encoding: 'utf8' }).split(' ')[0]).toBe(sha256Hex(text));
	});
});
