import { createHash } from 'node:crypto';
import { mkdir, realpath, rm } from 'node:fs/promises';
import { connect, createServer, type Server } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** Gives the folder free again. */
export type Unlock = () => Promise<void>;

/**
 * Takes a folder for this process alone, or throws a sentence that a person can act on. The embedded database has no lock of its own:
 * a second opener loses rows unsaid. A listening socket goes with its process, also after kill -9, where a file with a number in it stays.
 * Linux: an abstract socket (seen only within one network namespace: two containers must not share the folder). Windows: a named pipe.
 * Elsewhere: a socket file, removed where nobody answers on it.
 */
export async function lockFolder(folder: string, platform: NodeJS.Platform = process.platform): Promise<Unlock> {
	await mkdir(folder, { recursive: true });
	const name = `bb-${createHash('sha256')
		.update(await realpath(folder))
		.digest('hex')
		.slice(0, 24)}`;
	const inUse = () =>
		new Error(`The folder ${folder} is in use by another Batterboard. Stop that one first, or set DATA_DIR to another folder.`);
	if (platform === 'linux') return unlock(await listen(`\0${name}`, inUse));
	if (platform === 'win32') return unlock(await listen(`\\\\.\\pipe\\${name}`, inUse));
	const file = join(tmpdir(), `${name}.sock`);
	if (!(await hasAnswer(file))) await rm(file, { force: true });
	return unlock(await listen(file, inUse));
}

function listen(address: string, inUse: () => Error): Promise<Server> {
	return new Promise((resolve, reject) => {
		const server = createServer((socket) => socket.destroy());
		server.once('error', (error: NodeJS.ErrnoException) => reject(error.code === 'EADDRINUSE' ? inUse() : error));
		server.listen(address, () => resolve(server.unref()));
	});
}

function hasAnswer(file: string): Promise<boolean> {
	return new Promise((resolve) => {
		const socket = connect(file);
		socket.once('connect', () => resolve(true)).once('error', () => resolve(false));
		socket.once('connect', () => socket.destroy());
	});
}

function unlock(server: Server): Unlock {
	return () => new Promise((resolve) => server.close(() => resolve()));
}
