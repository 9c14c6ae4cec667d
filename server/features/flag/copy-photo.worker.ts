import { parentPort, workerData } from 'node:worker_threads';
import type { ThreadMessage } from '../../platform/run-in-thread.ts';
import { copyPhoto, type PhotoCopy } from './copy-photo.ts';

const { bytes } = workerData as { bytes: Uint8Array };
parentPort?.postMessage({ output: await copyPhoto(bytes) } satisfies ThreadMessage<PhotoCopy>);
