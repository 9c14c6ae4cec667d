import type { JobContext, JobDefinition, JobEnd, JobRunner, Platform } from './platform.ts';

/**
 * A runner for the queue: parses what was sent by the definition's schema, so that `run` is handed its own type. Input of another
 * shape is a defect and throws. `giveUp` marks what the job was to make as failed, when every try threw.
 */
export function runnerOf<Input extends { jobId: string; siteId: string }>(
	definition: JobDefinition<Input>,
	run: (input: Input, context: JobContext) => Promise<JobEnd>,
	giveUp?: (input: Input, platform: Platform, reason: string) => Promise<void>,
): JobRunner {
	const runner: JobRunner = { name: definition.name, run: (input, context) => run(definition.input.parse(input), context) };
	if (giveUp !== undefined) runner.giveUp = (input, platform, reason) => giveUp(definition.input.parse(input), platform, reason);
	return runner;
}
