import { chmodSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openSecretBox, secretBox } from '../../server/platform/secret-box.ts';

let dataDir: string;
beforeEach(() => {
	dataDir = mkdtempSync(join(tmpdir(), 'bb-box-'));
});
afterEach(() => rmSync(dataDir, { recursive: true, force: true }));

describe('the box for secrets', () => {
	it('gives back what it took, to its owner alone, and never writes it twice alike', async () => {
		const box = await openSecretBox(dataDir);
		const sealed = box.seal('JBSWY3DPEHPK3PXP', 'ida');
		expect(sealed).not.toContain('JBSWY3DPEHPK3PXP');
		expect(box.open(sealed, 'ida')).toBe('JBSWY3DPEHPK3PXP');
		expect(box.open(sealed, 'jo')).toBeNull();
		expect(box.seal('JBSWY3DPEHPK3PXP', 'ida')).not.toBe(sealed);
		expect(box.open('JBSWY3DPEHPK3PXP', 'ida')).toBeNull();
	});

	it('opens nothing that was altered in any place, cut, or sealed under another key', () => {
		const box = secretBox(new Uint8Array(32).fill(7));
		const sealed = box.seal('secret', 'ida');
		const bytes = Buffer.from(sealed.slice('sealed1.'.length), 'base64url');
		for (let i = 0; i < bytes.length; i += 1) {
			const altered = Buffer.from(bytes);
			altered[i] = (altered[i] ?? 0) ^ 1;
			expect(box.open(`sealed1.${altered.toString('base64url')}`, 'ida')).toBeNull();
			expect(box.open(`sealed1.${bytes.subarray(0, i).toString('base64url')}`, 'ida')).toBeNull();
		}
		expect(secretBox(new Uint8Array(32).fill(8)).open(sealed, 'ida')).toBeNull();
	});

	it('keeps its key over a restart in a file for its owner alone, and refuses one that others may read or that is no key', async () => {
		const sealed = (await openSecretBox(dataDir)).seal('secret', 'ida');
		const path = join(dataDir, 'keys', 'secrets.key');
		expect(statSync(path).mode & 0o777).toBe(0o600);
		expect(readFileSync(path, 'utf8')).toMatch(/^[A-Za-z0-9+/]{43}=\n$/);
		expect((await openSecretBox(dataDir)).open(sealed, 'ida')).toBe('secret');
		chmodSync(path, 0o644);
		await expect(openSecretBox(dataDir)).rejects.toThrow('may be read by others');
		chmodSync(path, 0o600);
		writeFileSync(path, 'short');
		await expect(openSecretBox(dataDir)).rejects.toThrow('cannot be read as a key');
	});
});
