import { type ChildProcess, spawn } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { basename, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'vite';

const root = fileURLToPath(new URL('../..', import.meta.url));

export interface Program {
	child: ChildProcess;
	/** What it has written so far. */
	out: () => string;
	err: () => string;
	/** Resolves when its standard output has this text; rejects when it ends before. */
	says: (text: string) => Promise<void>;
	/** Its exit code, or the signal that ended it. */
	ended: Promise<number | NodeJS.Signals>;
}

/** Programs of ours, built as the server is. */
export interface Programs {
	run: (name: string, environment?: Record<string, string>, input?: string, args?: string[]) => Program;
	/** Kills what still runs. */
	endAll: () => Promise<void>;
	remove: () => void;
}

/** Builds programs in a second or two; each start is then some seconds shorter than from the source. */
export async function buildPrograms(files: string[]): Promise<Programs> {
	mkdirSync(join(root, '.tmp'), { recursive: true });
	const outDir = mkdtempSync(join(root, '.tmp/programs-'));
	await build({
		configFile: false,
		root,
		logLevel: 'error',
		publicDir: false,
		ssr: { external: true },
		build: {
			ssr: true,
			target: 'node20',
			outDir,
			rollupOptions: { input: Object.fromEntries(files.map((file) => [basename(file, '.ts'), join(root, file)])) },
		},
	});
	let running: Program[] = [];
	return {
		run: (name, environment = {}, input = '', args = []) => {
			const program = runProgram([join(outDir, `${name}.js`), ...args], environment, input);
			running.push(program);
			return program;
		},
		endAll: async () => {
			for (const { child } of running) child.kill('SIGKILL');
			await Promise.all(running.map(({ ended }) => ended));
			running = [];
		},
		remove: () => rmSync(outDir, { recursive: true, force: true }),
	};
}

/** A process of its own, in the checkout. */
function runProgram(fileAndArguments: string[], environment: Record<string, string>, input: string): Program {
	const child = spawn(process.execPath, fileAndArguments, {
		cwd: root,
		env: { ...process.env, NODE_ENV: '', VITEST: '', ...environment },
		stdio: ['pipe', 'pipe', 'pipe'],
	});
	child.stdin.end(input);
	let [out, err] = ['', ''];
	child.stdout.setEncoding('utf8').on('data', (text: string) => {
		out += text;
	});
	child.stderr.setEncoding('utf8').on('data', (text: string) => {
		err += text;
	});
	const ended = new Promise<number | NodeJS.Signals>((resolve) => {
		child.on('close', (code, signal) => resolve(code ?? signal ?? 'SIGKILL'));
	});
	return {
		child,
		out: () => out,
		err: () => err,
		ended,
		says: (text) =>
			new Promise((resolve, reject) => {
				const look = () => out.includes(text) && resolve();
				child.stdout.on('data', look);
				look();
				ended.then((code) => reject(new Error(`It ended with ${code} before it said "${text}": ${err}`)));
			}),
	};
}

export function freePort(): Promise<number> {
	return new Promise((resolve, reject) => {
		const server = createServer().once('error', reject);
		server.listen(0, '127.0.0.1', () => {
			const address = server.address();
			server.close(() => resolve(typeof address === 'object' && address !== null ? address.port : 0));
		});
	});
}
