import { parentPort, workerData } from 'node:worker_threads';
import type { ThreadMessage } from '../../platform/run-in-thread.ts';
import { fitReportPdf } from './fit-report.ts';
import type { FitReportData } from './fit-report-data.ts';

// Drawing the pages and subsetting the fonts takes the better part of a second: not in the thread that answers everybody.
const bytes = await fitReportPdf(workerData as FitReportData);
parentPort?.postMessage({ output: bytes } satisfies ThreadMessage<Uint8Array>);
