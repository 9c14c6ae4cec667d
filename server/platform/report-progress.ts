import { and, eq } from 'drizzle-orm';
import { jobs } from '../db/schema/job.ts';
import type { JobContext, Platform } from './platform.ts';

const leastGapMs = 250;

/** Writes what a runner reports onto our row, at most four times a second, the newest always last. */
export function reporter(platform: Platform, jobId: string): { report: JobContext['report']; settle: () => Promise<void> } {
	type Progress = Parameters<JobContext['report']>[0];
	let newest: Progress | null = null;
	let timer: NodeJS.Timeout | null = null;
	let writing: Promise<void> = Promise.resolve();
	let wroteAtMs = Number.NEGATIVE_INFINITY;
	const write = (): void => {
		timer = null;
		if (newest === null) return;
		const { doing, done, of } = newest;
		newest = null;
		wroteAtMs = performance.now();
		writing = writing.then(async () => {
			await platform.db
				.update(jobs)
				.set({ doing: doing.slice(0, 200), done: Math.max(0, Math.round(done)), of: Math.max(0, Math.round(of)) })
				.where(and(eq(jobs.id, jobId), eq(jobs.state, 'running')));
		});
		// A progress that could not be written is no reason to fail the job; the end is written by itself.
		writing = writing.catch(() => undefined);
	};
	return {
		report: (progress) => {
			newest = progress;
			timer ??= setTimeout(write, Math.max(0, wroteAtMs + leastGapMs - performance.now()));
		},
		settle: async () => {
			if (timer !== null) clearTimeout(timer);
			write();
			await writing;
		},
	};
}
