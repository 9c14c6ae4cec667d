import { and, eq, inArray } from 'drizzle-orm';
import { jobs } from '../db/schema/job.ts';
import type { JobEnd, JobRunner, Platform } from './platform.ts';
import { reporter } from './report-progress.ts';

/** One try at a job, as the queue hands it out. */
export interface JobTry {
	jobId: string;
	input: unknown;
	isLastTry: boolean;
}

export interface JobLimits {
	/** Aborted after this long. */
	longestMs: number;
	/** Given up this long after an abort that the runner did not heed. */
	heedMs: number;
	/** How often the person's wish to cancel is looked up. */
	wishMs: number;
}

export const jobLimits: JobLimits = { longestMs: 20 * 60_000, heedMs: 30_000, wishMs: 250 };

/** The server's end, in two steps: first nothing more is written, then, the database closed, what runs is aborted. */
export interface ServerEnd {
	isStopping: () => boolean;
	abandoned: AbortSignal;
}

type AbortReason = 'cancelled' | 'too-long' | 'server-stops';

/** Told to the person where every try threw. */
export const gaveUpReason =
	'Something in this program went wrong, each time it was tried. Nothing of it was kept; your file is not at fault as far as we know. Start it again; if it fails again, report it with this time.';
const tooLongReason = (limitMs: number) =>
	`This took longer than ${Math.round(limitMs / 60_000)} minutes and was ended. Nothing of it was kept. Try a smaller file.`;

/**
 * Runs one try and keeps our row to it: running, progress, the end. A job that already ended is left alone, so that one handed out
 * twice ends once. Throws where the queue shall try again. Once the server is stopping no failure is written: the job was cut off.
 */
export async function runJob(
	platform: Platform,
	runner: JobRunner,
	{ jobId, input, isLastTry }: JobTry,
	server: ServerEnd,
	limits: JobLimits = jobLimits,
): Promise<void> {
	const row = await begin(platform, jobId);
	if (row === null) return;
	const abort = new AbortController();
	const abortFor = (reason: AbortReason) => abort.abort(reason);
	const onStop = () => abortFor('server-stops');
	server.abandoned.addEventListener('abort', onStop, { once: true });
	if (row.isCancelWished) abortFor('cancelled');
	const limit = setTimeout(abortFor, limits.longestMs, 'too-long' satisfies AbortReason);
	const wish = setInterval(() => {
		isCancelWished(platform, jobId).then(
			(isWished) => isWished && abortFor('cancelled'),
			// Looked up again a moment later; where the database is gone, so is the run.
			() => undefined,
		);
	}, limits.wishMs);
	const progress = reporter(platform, jobId);
	try {
		const end = await Promise.race([
			runner.run(input, { platform, report: progress.report, signal: abort.signal }),
			unheeded(abort.signal, limits.heedMs),
		]);
		await progress.settle();
		if (server.isStopping() && end.state !== 'done') throw new Error('The server stops.');
		await finish(
			platform,
			jobId,
			abort.signal.reason === 'too-long' && end.state === 'cancelled' ? failed(tooLongReason(limits.longestMs)) : end,
		);
	} catch (error) {
		await progress.settle();
		if (server.isStopping()) throw error;
		await afterThrow(platform, runner, { jobId, input, isLastTry }, abort.signal.reason, limits, error);
	} finally {
		clearTimeout(limit);
		clearInterval(wish);
		server.abandoned.removeEventListener('abort', onStop);
	}
}

/** What every try left undone is marked as failed, on our row and by the runner. */
export async function giveUp(platform: Platform, runner: JobRunner, jobId: string, input: unknown, reason: string): Promise<void> {
	await runner.giveUp?.(input, platform, reason);
	await finish(platform, jobId, failed(reason));
}

async function afterThrow(
	platform: Platform,
	runner: JobRunner,
	{ jobId, input, isLastTry }: JobTry,
	reason: unknown,
	limits: JobLimits,
	error: unknown,
): Promise<void> {
	if (reason === 'cancelled') {
		await runner.giveUp?.(input, platform, 'Cancelled.');
		return finish(platform, jobId, { state: 'cancelled' });
	}
	if (reason === 'too-long') return giveUp(platform, runner, jobId, input, tooLongReason(limits.longestMs));
	console.error(`Job ${runner.name} ${jobId} threw:`, error);
	if (isLastTry) return giveUp(platform, runner, jobId, input, gaveUpReason);
	await platform.db
		.update(jobs)
		.set({ state: 'waiting', doing: 'Waiting to be tried again' })
		.where(and(eq(jobs.id, jobId), eq(jobs.state, 'running')));
	throw error;
}

async function begin(platform: Platform, jobId: string): Promise<{ isCancelWished: boolean } | null> {
	const [row] = await platform.db
		.update(jobs)
		.set({ state: 'running' })
		.where(and(eq(jobs.id, jobId), inArray(jobs.state, ['waiting', 'running'])))
		.returning({ isCancelWished: jobs.isCancelWished });
	return row ?? null;
}

async function finish(platform: Platform, jobId: string, end: JobEnd): Promise<void> {
	await platform.db
		.update(jobs)
		.set({ state: end.state, reason: end.state === 'failed' ? end.reason : null, endedAt: platform.now() })
		.where(and(eq(jobs.id, jobId), inArray(jobs.state, ['waiting', 'running'])));
}

async function isCancelWished(platform: Platform, jobId: string): Promise<boolean> {
	const [row] = await platform.db.select({ isCancelWished: jobs.isCancelWished }).from(jobs).where(eq(jobs.id, jobId));
	return row?.isCancelWished ?? false;
}

function failed(reason: string): JobEnd {
	return { state: 'failed', reason };
}

/** Rejects some time after an abort, so that a runner that does not heed it holds up nothing. */
function unheeded(signal: AbortSignal, heedMs: number): Promise<never> {
	return new Promise((_resolve, reject) => {
		const wait = () => setTimeout(reject, heedMs, new Error('The runner did not heed the abort.')).unref();
		if (signal.aborted) wait();
		else signal.addEventListener('abort', wait, { once: true });
	});
}
