import type { JobRunner } from '../platform/platform.ts';

/** All job runners. */
export const jobRunners: readonly JobRunner[] = [];
