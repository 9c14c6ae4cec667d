import { computeCheckRunner } from '../features/check/compute-check-job.ts';
import { previewPlacingRunner } from '../features/model/preview-placing-job.ts';
import { readIfcRunner } from '../features/model/read-ifc-job.ts';
import { storePointsRunner } from '../features/survey/store-points-job.ts';
import type { JobRunner } from '../platform/platform.ts';

/** All job runners. */
export const jobRunners: readonly JobRunner[] = [readIfcRunner, previewPlacingRunner, storePointsRunner, computeCheckRunner];
