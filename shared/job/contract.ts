import { eventIterator } from '@orpc/contract';
import { z } from 'zod';
import { base, siteInput } from '../base-contract.ts';

export const jobState = z.enum(['waiting', 'running', 'done', 'failed', 'cancelled']);
export const jobProgress = z.object({
	jobId: z.uuid(),
	kind: z.string(),
	state: jobState,
	/** What it is doing, in words: "Reading elements". */
	doing: z.string(),
	done: z.number().int(),
	of: z.number().int(),
	/** Why it failed or was refused, what was kept, what to do. */
	reason: z.string().nullable(),
	/** What it makes: a revision, a survey, a check. */
	subjectId: z.uuid().nullable(),
});
export type JobProgress = z.infer<typeof jobProgress>;

const jobInput = siteInput.extend({ jobId: z.uuid() });

export const jobContract = {
	get: base.meta({ permission: 'job.see' }).input(jobInput).output(jobProgress),
	/** Each change until it ends. */
	follow: base.meta({ permission: 'job.see' }).input(jobInput).output(eventIterator(jobProgress)),
	cancel: base.meta({ permission: 'job.cancel' }).input(jobInput).output(jobProgress),
};
