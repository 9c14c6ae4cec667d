import type { JobContext, JobDefinition, JobEnd, JobRunner } from './platform.ts';

/** A runner for the queue: parses what was sent by the definition's schema, so that `run` is handed its own type. Input of another shape is a defect and throws. */
export function runnerOf<Input extends { jobId: string; siteId: string }>(
	definition: JobDefinition<Input>,
	run: (input: Input, context: JobContext) => Promise<JobEnd>,
): JobRunner {
	return { name: definition.name, run: (input, context) => run(definition.input.parse(input), context) };
}
