import { parentPort, workerData } from 'node:worker_threads';
import type { PointTableReading } from '#shared/survey/point-table-schema.ts';
import type { ThreadMessage } from '../../platform/run-in-thread.ts';
import { readSurvey, type SurveyReading } from './read-survey.ts';

/** What the thread is handed: a point file and how it is to be read. */
export interface PointsToRead {
	bytes: Uint8Array;
	reading: PointTableReading;
}

const { bytes, reading } = workerData as PointsToRead;
parentPort?.postMessage({ output: readSurvey(bytes, reading) } satisfies ThreadMessage<SurveyReading>);
