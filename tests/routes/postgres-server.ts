import { execFileSync, spawnSync } from 'node:child_process';
import { chownSync, existsSync, mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

export interface PostgresServer {
	/** Without a database's name at the end. */
	url: string;
	stop: () => void;
}

/** A PostgreSQL server of our own for one test run, on a free port, without fsync. It refuses to run as root, so root runs it as the user `postgres`. */
export async function startPostgres(): Promise<PostgresServer> {
	const programs = postgresPrograms();
	const folder = mkdtempSync(join(tmpdir(), 'bb-postgres-'));
	const isRoot = process.getuid?.() === 0;
	if (isRoot) {
		const [uid, gid] = ['-u', '-g'].map((flag) => Number(execFileSync('id', [flag, 'postgres'], { encoding: 'utf8' })));
		chownSync(folder, uid!, gid!);
	}
	const run = (program: string, args: string[]) => {
		const path = join(programs, program);
		const [command, all] = isRoot ? ['runuser', ['-u', 'postgres', '--', path, ...args]] : [path, args];
		const { status, stderr } = spawnSync(command, all, { encoding: 'utf8', stdio: ['ignore', 'ignore', 'pipe'], cwd: folder });
		if (status !== 0) throw new Error(`${program} ended with ${status}: ${stderr}`);
	};
	const data = join(folder, 'data');
	run('initdb', ['-D', data, '-A', 'trust', '-U', 'postgres', '-E', 'UTF8', '--locale=C', '--no-sync']);
	const port = await freePort();
	const options = `-p ${port} -k ${folder} -c listen_addresses=127.0.0.1 -c fsync=off -c max_connections=60`;
	run('pg_ctl', ['-D', data, '-o', options, '-l', join(folder, 'log'), '-w', 'start']);
	return {
		url: `postgres://postgres@127.0.0.1:${port}`,
		stop: () => {
			run('pg_ctl', ['-D', data, '-m', 'immediate', 'stop']);
			rmSync(folder, { recursive: true, force: true });
		},
	};
}

function postgresPrograms(): string {
	const base = '/usr/lib/postgresql';
	const newest = existsSync(base) ? readdirSync(base).sort((a, b) => Number(b) - Number(a))[0] : undefined;
	if (newest === undefined) throw new Error('The route tests run on PostgreSQL too, and it is not installed: apt-get install postgresql.');
	return join(base, newest, 'bin');
}

function freePort(): Promise<number> {
	return new Promise((resolve, reject) => {
		const server = createServer().once('error', reject);
		server.listen(0, '127.0.0.1', () => {
			const address = server.address();
			server.close(() => resolve(typeof address === 'object' && address !== null ? address.port : 0));
		});
	});
}
