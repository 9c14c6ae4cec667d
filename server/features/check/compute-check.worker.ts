import { parentPort, workerData } from 'node:worker_threads';
import type { CheckInput, CheckOutput } from '#shared/check/check-input.ts';
import { runCheck } from '#shared/check/run-check.ts';
import type { ThreadMessage } from '../../platform/run-in-thread.ts';

/** The check's arithmetic in a thread of its own: workerData is a CheckInput. To cancel, end the thread. */
const post = (message: ThreadMessage<CheckOutput>): void => parentPort?.postMessage(message);

post({ output: runCheck(workerData as CheckInput, { onProgress: (done, of) => post({ progress: { done, of } }) }) });
