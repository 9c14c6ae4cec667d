import type { CheckInputCheckpoint } from './check-input.ts';
import type { Deviation } from './check-schema.ts';
import type { CheckpointLimits } from './judge-deviation.ts';
import type { MeasuredDeviation } from './measure-deviation.ts';
import type { Observation } from './observation.ts';

/** One checkpoint with what decided it: what findings and derived results are made from. */
export interface CheckedCheckpoint {
	readonly checkpoint: CheckInputCheckpoint;
	readonly observation: Observation | null;
	readonly measured: MeasuredDeviation | null;
	readonly limits: CheckpointLimits;
	readonly deviation: Deviation;
}
