import { readFile } from 'node:fs/promises';
import { readPublicKeys, type TrustedKey } from '#shared/record/public-key.ts';
import { readRecordFile } from '#shared/record/read-record-file.ts';
import { verifyRecords } from '#shared/record/verify-records.ts';
import { type Answer, InputRefused } from './refusal.ts';

/** `verify RECORD.json|CHAIN.json --key KEY.pem… [--head SHA256]`: code 3 where it is not genuine, 2 where it is no record or a key cannot be read. */
export async function runVerify(args: readonly string[]): Promise<Answer> {
	try {
		const { file, keyFiles, head } = readArguments(args);
		const read = readRecordFile(await bytesOf(file));
		if (read.kind === 'other') throw new InputRefused('bad-input', read.message, file);
		const keys = await readKeys(keyFiles);
		const verification = await verifyRecords(read, { keys, head });
		return { exitCode: verification.genuine ? 0 : 3, output: verification };
	} catch (error) {
		if (error instanceof InputRefused) return error.answer;
		throw error;
	}
}

function readArguments(args: readonly string[]): { file: string; keyFiles: string[]; head: string | null } {
	const files: string[] = [];
	const keyFiles: string[] = [];
	let head: string | null = null;
	for (let index = 0; index < args.length; index += 1) {
		const word = args[index] ?? '';
		if (word !== '--key' && word !== '--head') {
			if (word.startsWith('--')) throw new InputRefused('bad-input', `${word} is no option of verify; there are --key and --head.`, word);
			files.push(word);
			continue;
		}
		index += 1;
		const value = args[index];
		if (value === undefined) throw new InputRefused('bad-input', `${word} has nothing after it.`, word);
		if (word === '--head') {
			if (!/^[0-9a-f]{64}$/i.test(value))
				throw new InputRefused('bad-input', `--head is "${value}"; it must be a SHA-256 in hexadecimal.`, word);
			head = value.toLowerCase();
			continue;
		}
		keyFiles.push(value);
		// Several after one --key, as `--key A.pem B.pem`.
		for (let next = args[index + 1]; next?.endsWith('.pem') === true; next = args[index + 1]) {
			keyFiles.push(next);
			index += 1;
		}
	}
	const [file] = files;
	if (file === undefined || files.length > 1) throw new InputRefused('bad-input', `One record or chain; there are ${files.length} files.`);
	if (keyFiles.length === 0) throw new InputRefused('bad-input', 'No key was given: --key KEY.pem says whose signature counts.', '--key');
	return { file, keyFiles, head };
}

async function readKeys(files: readonly string[]): Promise<TrustedKey[]> {
	const read = files.map(async (file) => {
		const pem = new TextDecoder().decode(await bytesOf(file));
		try {
			return await readPublicKeys(pem);
		} catch (error) {
			throw new InputRefused('bad-key', error instanceof Error ? error.message : String(error), file);
		}
	});
	return (await Promise.all(read)).flat();
}

async function bytesOf(file: string): Promise<Uint8Array> {
	try {
		return await readFile(file);
	} catch (error) {
		throw new InputRefused('bad-input', `The file ${file} cannot be read: ${error instanceof Error ? error.message : String(error)}`, file);
	}
}
