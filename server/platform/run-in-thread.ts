import { existsSync } from 'node:fs';
import { createRequire } from 'node:module';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { type TransferListItem, Worker, type WorkerOptions } from 'node:worker_threads';

/** A worker's file beside the module that names it: `{ file: './compute-check.worker.ts', from: import.meta.url }`. */
export interface WorkerFile {
	file: string;
	from: string;
}

/** What a worker of ours posts: how far it is, at the end its answer. A throw in it is its error. */
export type ThreadMessage<Output> = { progress: { done: number; of: number } } | { output: Output };

export interface ThreadOptions {
	signal?: AbortSignal;
	onProgress?: (progress: { done: number; of: number }) => void;
	/** Handed over, not copied; of no more use to the caller. */
	transfer?: readonly TransferListItem[];
	memoryMb?: number;
}

/**
 * Runs arithmetic of ours in a thread, so that the server goes on answering. The worker is handed `input` as its workerData.
 * Rejects with the worker's error, or with the abort's reason: an abort ends the thread in the middle.
 */
export function runInThread<Input, Output>(worker: WorkerFile, input: Input, options: ThreadOptions = {}): Promise<Output> {
	const { signal, onProgress, transfer = [], memoryMb = 1024 } = options;
	return new Promise<Output>((resolve, reject) => {
		if (signal?.aborted) return reject(reasonOf(signal));
		const thread = threadOf(worker, {
			workerData: input,
			transferList: [...transfer],
			resourceLimits: { maxOldGenerationSizeMb: memoryMb },
		});
		const onAbort = () => end(() => reject(reasonOf(signal)));
		const end = (settle: () => void) => {
			signal?.removeEventListener('abort', onAbort);
			thread.removeAllListeners();
			// What a thread still says while it is being ended is of no interest.
			thread.on('error', () => undefined);
			void thread.terminate();
			settle();
		};
		signal?.addEventListener('abort', onAbort, { once: true });
		thread.on('message', (message: ThreadMessage<Output>) => {
			if ('progress' in message) onProgress?.(message.progress);
			else end(() => resolve(message.output));
		});
		thread.on('error', (error) => end(() => reject(error)));
		thread.on('exit', (code) => end(() => reject(new Error(`${worker.file} ended with ${code} and gave no answer.`))));
	});
}

/** Built, the program of that name, beside the bundle or one folder up; in the source tree the TypeScript file beside the caller. */
function threadOf({ file, from }: WorkerFile, options: WorkerOptions): Worker {
	const source = new URL(file, from);
	if (existsSync(fileURLToPath(source))) {
		// On Node 20 a thread takes no loader over from `--import`: it registers one itself, then begins.
		const loader = pathToFileURL(
			createRequire(from)
				.resolve('tsx/esm/api')
				.replace(/\.cjs$/, '.mjs'),
		).href;
		const begin = `import(${JSON.stringify(loader)}).then(({ register }) => { register(); return import(${JSON.stringify(source.href)}); });`;
		return new Worker(begin, { ...options, eval: true });
	}
	const name = file.replace(/\.ts$/, '.js');
	for (const place of [name, `../${name}`]) {
		const built = new URL(place, from);
		if (existsSync(fileURLToPath(built))) return new Worker(built, options);
	}
	throw new Error(`There is no ${name} beside ${from}.`);
}

function reasonOf(signal: AbortSignal | undefined): Error {
	return new Error(`The thread was ended: ${String(signal?.reason)}.`);
}
