import { createCipheriv, createDecipheriv, randomBytes } from 'node:crypto';
import { mkdir, open, readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';

/** Keeps what must be read again (no hash would do) so that the database alone does not tell it. */
export interface SecretBox {
	/** AES-256-GCM (NIST SP 800-38D) under a fresh 96-bit nonce; holds only for this owner. */
	seal: (text: string, owner: string) => string;
	/** Null where it was sealed for another owner, altered, or under another key. */
	open: (sealed: string, owner: string) => string | null;
	isSealed: (text: string) => boolean;
}

const prefix = 'sealed1.';
const keyBytes = 32;
const nonceBytes = 12;
const tagBytes = 16;

/**
 * The box of this server: its key lies beside the signing keys, made at the first start, readable by its owner alone. Throws a sentence where
 * the file is no key or others may read it.
 */
export async function openSecretBox(dataDir: string): Promise<SecretBox> {
	const folder = join(dataDir, 'keys');
	await mkdir(folder, { recursive: true, mode: 0o700 });
	const path = join(folder, 'secrets.key');
	await makeKey(path);
	const { mode } = await stat(path);
	if (process.platform !== 'win32' && (mode & 0o077) !== 0)
		throw new Error(`The key ${path} may be read by others on this machine. Take that away (chmod 600).`);
	const key = Buffer.from((await readFile(path, 'utf8')).trim(), 'base64');
	if (key.length !== keyBytes)
		throw new Error(
			`The key ${path} cannot be read as a key. Put it back from a backup: without it nobody’s codes of an app open anything.`,
		);
	return secretBox(key);
}

/** The same over a key of 32 bytes. */
export function secretBox(key: Uint8Array): SecretBox {
	const isSealed = (text: string) => text.startsWith(prefix);
	return {
		isSealed,
		seal: (text, owner) => {
			const nonce = randomBytes(nonceBytes);
			const cipher = createCipheriv('aes-256-gcm', key, nonce).setAAD(Buffer.from(owner));
			const body = Buffer.concat([cipher.update(text, 'utf8'), cipher.final()]);
			return prefix + Buffer.concat([nonce, cipher.getAuthTag(), body]).toString('base64url');
		},
		open: (sealed, owner) => {
			if (!isSealed(sealed)) return null;
			const bytes = Buffer.from(sealed.slice(prefix.length), 'base64url');
			if (bytes.length < nonceBytes + tagBytes) return null;
			const decipher = createDecipheriv('aes-256-gcm', key, bytes.subarray(0, nonceBytes), { authTagLength: tagBytes });
			decipher.setAAD(Buffer.from(owner)).setAuthTag(bytes.subarray(nonceBytes, nonceBytes + tagBytes));
			try {
				return Buffer.concat([decipher.update(bytes.subarray(nonceBytes + tagBytes)), decipher.final()]).toString('utf8');
			} catch {
				return null;
			}
		},
	};
}

async function makeKey(path: string): Promise<void> {
	try {
		const file = await open(path, 'wx', 0o600);
		try {
			await file.writeFile(`${randomBytes(keyBytes).toString('base64')}\n`);
			await file.sync();
		} finally {
			await file.close();
		}
	} catch (error) {
		if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
	}
}
