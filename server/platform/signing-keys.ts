import { createHash, createPrivateKey, createPublicKey, generateKeyPairSync, type KeyObject, sign } from 'node:crypto';
import { mkdir, open, readdir, readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';

/** A key of this server as it lies in the data folder. */
export interface SigningKey {
	number: number;
	/** SHA-256 of the public half's SubjectPublicKeyInfo (DER). */
	sha256: string;
	publicKeyPem: string;
	/** Ed25519 (RFC 8032) over the bytes as they are. */
	sign: (message: Uint8Array) => Uint8Array;
}

const nameForm = /^signing-(\d{4})\.pem$/;
const folderOf = (dataDir: string): string => join(dataDir, 'keys');

/**
 * All signing keys of the data folder, the one in use last; the first start makes one. Each is a file that only its owner may read.
 * Throws a sentence where a file cannot be used, and where others may read it: who has the key can sign in this server's name.
 */
export async function openSigningKeys(dataDir: string): Promise<{ current: SigningKey; all: readonly SigningKey[] }> {
	const folder = folderOf(dataDir);
	await mkdir(folder, { recursive: true, mode: 0o700 });
	if ((await numbersIn(folder)).length === 0) await addSigningKey(dataDir);
	const all: SigningKey[] = [];
	for (const number of await numbersIn(folder)) all.push(await readKey(folder, number));
	const current = all.at(-1);
	if (current === undefined) throw new Error(`There is no signing key in ${folder}.`);
	return { current, all };
}

/** Makes the next key; records signed from the next start on are signed with it, earlier ones stay as they are. Answers its number. */
export async function addSigningKey(dataDir: string): Promise<number> {
	const folder = folderOf(dataDir);
	await mkdir(folder, { recursive: true, mode: 0o700 });
	const number = ((await numbersIn(folder)).at(-1) ?? 0) + 1;
	const { privateKey } = generateKeyPairSync('ed25519');
	const file = await open(join(folder, fileOf(number)), 'wx', 0o600);
	try {
		await file.writeFile(privateKey.export({ type: 'pkcs8', format: 'pem' }));
		await file.sync();
	} finally {
		await file.close();
	}
	const held = await open(folder, 'r');
	await held.sync().finally(() => held.close());
	return number;
}

function fileOf(number: number): string {
	return `signing-${String(number).padStart(4, '0')}.pem`;
}

async function numbersIn(folder: string): Promise<number[]> {
	const names = await readdir(folder);
	return names
		.flatMap((name) => Number(nameForm.exec(name)?.[1] ?? []))
		.filter((number) => number > 0)
		.sort((a, b) => a - b);
}

async function readKey(folder: string, number: number): Promise<SigningKey> {
	const path = join(folder, fileOf(number));
	const { mode } = await stat(path);
	if (process.platform !== 'win32' && (mode & 0o077) !== 0)
		throw new Error(
			`The signing key ${path} may be read by others on this machine. Take that away (chmod 600), and think of a new key (npm run key:rotate).`,
		);
	let privateKey: KeyObject;
	try {
		privateKey = createPrivateKey(await readFile(path));
	} catch {
		throw new Error(`The signing key ${path} cannot be read as a key. Put it back from a backup; records signed with it stay valid.`);
	}
	if (privateKey.asymmetricKeyType !== 'ed25519') throw new Error(`The signing key ${path} is no Ed25519 key.`);
	const publicKey = createPublicKey(privateKey);
	return {
		number,
		sha256: createHash('sha256')
			.update(publicKey.export({ type: 'spki', format: 'der' }))
			.digest('hex'),
		publicKeyPem: publicKey.export({ type: 'spki', format: 'pem' }).toString(),
		sign: (message) => sign(null, message, privateKey),
	};
}
