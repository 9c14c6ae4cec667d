import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdir, open, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { pipeline } from 'node:stream/promises';
import type { FileStore, KeptFile } from './platform.ts';

/** Bytes on this disk, `<folder>/ab/cd…` by their SHA-256. Written beside, synced, then renamed: a file that is there is whole. */
export function diskFiles(folder: string): FileStore {
	const pathOf = (sha256: string): string => {
		if (!/^[0-9a-f]{64}$/.test(sha256)) throw new Error('A file is named by its SHA-256.');
		return join(folder, sha256.slice(0, 2), sha256.slice(2));
	};
	const moveIn = async (path: string, kept: KeptFile): Promise<KeptFile> => {
		const place = pathOf(kept.sha256);
		await mkdir(dirname(place), { recursive: true });
		await sync(path);
		await rename(path, place);
		await sync(dirname(place));
		return kept;
	};
	return {
		pathOf,
		read: (sha256) => readFile(pathOf(sha256)),
		keep: async (bytes) => {
			const kept = { sha256: createHash('sha256').update(bytes).digest('hex'), bytes: bytes.byteLength };
			const place = pathOf(kept.sha256);
			if (await isThere(place)) return kept;
			await mkdir(dirname(place), { recursive: true });
			const beside = `${place}.${process.pid}-${process.hrtime.bigint()}`;
			await writeFile(beside, bytes);
			return moveIn(beside, kept);
		},
		keepFrom: async (path) => {
			const kept = await hashOf(path);
			if (!(await isThere(pathOf(kept.sha256)))) return moveIn(path, kept);
			await rm(path);
			return kept;
		},
	};
}

/** SHA-256 and length of a file, read in pieces. */
export async function hashOf(path: string): Promise<KeptFile> {
	const hash = createHash('sha256');
	await pipeline(createReadStream(path), hash);
	return { sha256: hash.digest('hex'), bytes: (await stat(path)).size };
}

async function isThere(path: string): Promise<boolean> {
	return stat(path).then(
		() => true,
		() => false,
	);
}

async function sync(path: string): Promise<void> {
	const handle = await open(path, 'r');
	try {
		await handle.sync();
	} finally {
		await handle.close();
	}
}
