import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { rm } from 'node:fs/promises';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import type { Checkpoint, Element, ModelReading } from '#shared/model/model-schema.ts';
import { noChoices, type ReadingChoices } from '#shared/model/reading-choices.ts';
import type { ReadIfcCode, ReadIfcReply, ReadIfcRequest } from './ifc-messages.ts';

export type IfcProgress = { doing: string; done: number; of: number };

export type ReadIfcOptions = {
	path: string;
	/** Where the picture is written; beside it a file `….at` lies while reading. */
	glbPath: string;
	/** For the whole reading, all attempts together. */
	timeMs: number;
	memoryMb: number;
	/** Processor time for one element (wall time where the system does not tell); the one it hangs on is left out and the reading begun again. */
	elementTimeMs?: number;
	/** What people said before the reading; nothing where absent. */
	choices?: ReadingChoices;
	signal?: AbortSignal | undefined;
	onProgress?: ((progress: IfcProgress) => void) | undefined;
};

export type ReadIfcOutcome =
	| { ok: true; reading: ModelReading; hasPicture: boolean }
	| { ok: false; code: ReadIfcCode; message: string; detail?: string };

/** The program: the .ts beside this file while developing, the built one beside this program's bundle or in dist/server else. */
function programAndLoader(): { file: string; execArgv: string[] } {
	const here = fileURLToPath(import.meta.url);
	if (here.endsWith('.ts')) {
		const tsx = createRequire(import.meta.url).resolve('tsx');
		return { file: join(dirname(here), 'read-ifc.worker.ts'), execArgv: ['--import', pathToFileURL(tsx).href] };
	}
	const places = [dirname(here), dirname(dirname(here)), join(process.cwd(), 'dist', 'server')].map((folder) =>
		join(folder, 'read-ifc.worker.js'),
	);
	return { file: places.find((place) => existsSync(place)) ?? places.at(-1)!, execArgv: ['--enable-source-maps'] };
}

/** Resident memory of a process, MB; null where the system does not tell. */
function residentMb(pid: number): number | null {
	try {
		const kilobytes = /VmRSS:\s+(\d+) kB/.exec(readFileSync(`/proc/${pid}/status`, 'latin1'))?.[1];
		return kilobytes === undefined ? null : Number(kilobytes) / 1024;
	} catch {
		return null;
	}
}

/** Processor time a process has used, ms; null where the system does not tell. A busy machine must not make a good element look like a hanging one. */
function processorMs(pid: number): number | null {
	try {
		// After the name in brackets: field 14 and 15 of proc(5) are user and system time, in hundredths of a second.
		const fields = readFileSync(`/proc/${pid}/stat`, 'latin1').split(') ').at(-1)!.split(' ');
		return (Number(fields[11]) + Number(fields[12])) * 10;
	} catch {
		return null;
	}
}

function elementAt(atPath: string): number {
	try {
		const bytes = readFileSync(atPath);
		return bytes.length === 8 ? bytes.readDoubleLE(0) : 0;
	} catch {
		return 0;
	}
}

/** How far a reading stands back for other processes (nice(1)); it takes what they leave, all of it where they are idle. */
const niceness = 10;

type Attempt = ReadIfcOutcome | { ok: false; code: 'again'; entityNumber: number; why: 'hangs' | 'breaks' };

function startChild(timeMs: number, memoryMb: number): ChildProcess {
	const { file, execArgv } = programAndLoader();
	// Left to itself the collector lets garbage grow up to the limit; file, engine and picture lie outside its heap.
	const heapMb = Math.max(256, Math.floor(memoryMb * 0.6));
	// A hang inside WebAssembly hears no message: if this process dies, the limit on processor time still ends the child.
	const seconds = Math.ceil(timeMs / 1000) + 10;
	return spawn(
		'/bin/sh',
		// Behind the server, which runs in the same machine and has people waiting.
		[
			'-c',
			`ulimit -t ${seconds}; exec nice -n ${niceness} "$0" "$@"`,
			process.execPath,
			`--max-old-space-size=${heapMb}`,
			...execArgv,
			file,
		],
		{
			stdio: ['ignore', 'ignore', 'pipe', 'ipc'],
			serialization: 'advanced',
		},
	);
}

function attempt(options: ReadIfcOptions, request: ReadIfcRequest, endsAt: number): Promise<Attempt> {
	const { timeMs, memoryMb, signal, onProgress } = options;
	const elementTimeMs = options.elementTimeMs ?? 20_000;
	return new Promise((resolve) => {
		const child = startChild(timeMs, memoryMb);
		const elements: Element[] = [];
		const checkpoints: Checkpoint[] = [];
		let errorText = '';
		let isSettled = false;
		let watched = { entityNumber: 0, sinceMs: 0 };
		let answer: Attempt | null = null;

		// One end: the child is dead, its pipes closed, the watch off.
		const settle = (outcome: Attempt): void => {
			if (isSettled) return;
			isSettled = true;
			clearInterval(watch);
			signal?.removeEventListener('abort', cancel);
			if (child.exitCode === null && child.signalCode === null) {
				child.once('close', () => resolve(outcome));
				child.kill('SIGKILL');
			} else resolve(outcome);
		};
		const cancel = (): void => settle({ ok: false, code: 'cancelled', message: 'The reading was cancelled.' });
		const watch = setInterval(() => {
			const now = performance.now();
			const memory = child.pid === undefined ? null : residentMb(child.pid);
			if (memory !== null && memory > memoryMb)
				return settle({
					ok: false,
					code: 'too-much-memory',
					message: `Reading the file needs more than ${memoryMb} MB of memory. Split the model by building or discipline.`,
				});
			const entityNumber = elementAt(request.atPath);
			const spentMs = (child.pid === undefined ? null : processorMs(child.pid)) ?? now;
			if (entityNumber !== watched.entityNumber) watched = { entityNumber, sinceMs: spentMs };
			else if (entityNumber > 0 && spentMs - watched.sinceMs > elementTimeMs)
				return settle({ ok: false, code: 'again', entityNumber, why: 'hangs' });
			if (now > endsAt)
				settle({
					ok: false,
					code: 'took-too-long',
					message: `Reading the file took longer than ${Math.round(timeMs / 1000)} s${entityNumber > 0 ? ` (it was at element #${entityNumber})` : ''}. Split the model, or export it without cuts and curved shapes.`,
				});
		}, 200);

		if (signal?.aborted) return cancel();
		signal?.addEventListener('abort', cancel, { once: true });
		child.stderr?.setEncoding('utf8').on('data', (text: string) => {
			errorText = (errorText + text).slice(-2000);
		});
		child.on('error', (error) =>
			settle({ ok: false, code: 'crashed', message: 'The reader could not be started.', detail: error.message }),
		);
		child.on('message', (reply: ReadIfcReply) => {
			if (reply.kind === 'progress') onProgress?.({ doing: reply.doing, done: reply.done, of: reply.of });
			else if (reply.kind === 'elements') for (const element of reply.elements) elements.push(element);
			else if (reply.kind === 'checkpoints') for (const checkpoint of reply.checkpoints) checkpoints.push(checkpoint);
			else if (reply.kind === 'result')
				answer = { ok: true, reading: { ...reply.reading, elements, checkpoints }, hasPicture: reply.hasPicture };
			else if (reply.kind === 'broken-by') answer = { ok: false, code: 'again', entityNumber: reply.entityNumber, why: 'breaks' };
			else answer = { ok: false, code: reply.code, message: reply.message };
			if (answer) settle(answer);
		});
		child.on('close', (code, endedBy) => {
			if (isSettled) return;
			const entityNumber = elementAt(request.atPath);
			if (entityNumber > 0) return settle({ ok: false, code: 'again', entityNumber, why: 'breaks' });
			if (endedBy === 'SIGXCPU')
				return settle({ ok: false, code: 'took-too-long', message: `Reading the file took longer than ${Math.round(timeMs / 1000)} s.` });
			const isMemory = /heap out of memory|Cannot enlarge memory|allocation failed/i.test(errorText);
			settle(
				isMemory
					? {
							ok: false,
							code: 'too-much-memory',
							message: `Reading the file needs more than ${memoryMb} MB of memory. Split the model by building or discipline.`,
							detail: errorText,
						}
					: {
							ok: false,
							code: 'crashed',
							message: `The reader ended while reading the file (${endedBy ?? `code ${code}`}). The file may be damaged; nothing was stored.`,
							detail: errorText,
						},
			);
		});
		child.send(request, () => {});
	});
}

/** How often an element that hangs or breaks the engine is left out and the reading begun again. */
const MOST_HANGS = 2;
const MOST_BREAKS = 8;

/**
 * Reads an IFC file in a child process with limits of time and memory, killable. An element that the geometry engine hangs on or breaks on
 * is left out (it stands in `skipped` with the reason) and the file is read again without it. Never throws for what is in the file.
 */
export async function readIfcInChild(options: ReadIfcOptions): Promise<ReadIfcOutcome> {
	const request: ReadIfcRequest = {
		path: options.path,
		glbPath: options.glbPath,
		atPath: `${options.glbPath}.at`,
		leaveOut: [],
		choices: options.choices ?? noChoices,
	};
	const endsAt = performance.now() + options.timeMs;
	let hangs = 0;
	let breaks = 0;
	try {
		for (;;) {
			await rm(request.atPath, { force: true });
			const outcome = await attempt(options, request, endsAt);
			if (outcome.ok || outcome.code !== 'again') return outcome;
			const isHang = outcome.why === 'hangs';
			if (isHang) hangs++;
			else breaks++;
			const isKnown = request.leaveOut.some(({ entityNumber }) => entityNumber === outcome.entityNumber);
			if (isKnown || hangs > MOST_HANGS || breaks > MOST_BREAKS)
				return {
					ok: false,
					code: isHang ? 'took-too-long' : 'crashed',
					message: `The geometry engine ${isHang ? 'does not come to an end' : 'fails'} on element #${outcome.entityNumber}, and ${isHang ? 'did not' : 'failed'} on others before (${request.leaveOut.map(({ entityNumber }) => `#${entityNumber}`).join(', ')}). Repair or remove them in the program that wrote the file.`,
				};
			request.leaveOut.push({
				entityNumber: outcome.entityNumber,
				why: isHang
					? 'the geometry engine does not come to an end on its shape: it was left out'
					: 'the geometry engine fails on its shape: it was left out',
			});
		}
	} finally {
		await rm(request.atPath, { force: true });
	}
}
