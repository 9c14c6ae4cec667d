import { createPublicKey, verify } from 'node:crypto';
import { chmodSync, mkdtempSync, readdirSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { addSigningKey, openSigningKeys } from '../../server/platform/signing-keys.ts';

let dataDir: string;
beforeEach(() => {
	dataDir = mkdtempSync(join(tmpdir(), 'bb-keys-'));
});
afterEach(() => rmSync(dataDir, { recursive: true, force: true }));

describe('signing keys', () => {
	it('are made at the first start, for the owner of the file alone, and stay', async () => {
		const first = await openSigningKeys(dataDir);
		const [file] = readdirSync(join(dataDir, 'keys'));
		expect(statSync(join(dataDir, 'keys', file!)).mode & 0o777).toBe(0o600);
		const again = await openSigningKeys(dataDir);
		expect(again.current.sha256).toBe(first.current.sha256);
		const message = Buffer.from('text');
		expect(verify(null, message, createPublicKey(again.current.publicKeyPem), first.current.sign(message))).toBe(true);
	});

	it('are rotated: the newest signs, earlier ones are still published', async () => {
		const first = await openSigningKeys(dataDir);
		expect(await addSigningKey(dataDir)).toBe(2);
		const { current, all } = await openSigningKeys(dataDir);
		expect(current.number).toBe(2);
		expect(all.map(({ sha256 }) => sha256)).toEqual([first.current.sha256, current.sha256]);
	});

	it('are refused where others may read them, or where the file is none', async () => {
		await openSigningKeys(dataDir);
		const file = join(dataDir, 'keys', 'signing-0001.pem');
		chmodSync(file, 0o644);
		await expect(openSigningKeys(dataDir)).rejects.toThrow(/may be read by others/);
		chmodSync(file, 0o600);
		writeFileSync(file, 'x');
		await expect(openSigningKeys(dataDir)).rejects.toThrow(/cannot be read as a key/);
	});
});
