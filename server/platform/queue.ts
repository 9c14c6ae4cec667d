import { setTimeout } from 'node:timers/promises';
import PgBoss from 'pg-boss';
import { type Connection, type ExecuteSql, executeSqlIn } from '../db/connection.ts';
import type { Transaction } from '../db/database.ts';
import { settleLeftOverJobs } from './left-over-jobs.ts';
import type { JobQueue, JobRunner, Platform } from './platform.ts';
import { type JobLimits, jobLimits, runJob } from './run-job.ts';

/** Jobs of one kind at a time, so that one that hangs does not hold up the others. */
const atOnce = 2;
/** After a throw a job is tried again this often; a server that ended in the middle counts as a try. */
const retryLimit = 2;

export interface Queue {
	jobs: JobQueue;
	transaction: Platform['transaction'];
	/** Takes up what an earlier process left, then begins to work. */
	start: (platform: Platform) => Promise<void>;
	/** Hands out no more; what is running goes back into the queue. Call before the database closes. */
	stop: () => Promise<void>;
	/** Aborts what is running, and waits a moment for it. Call after the database closed: a run cut off is not a run cancelled. */
	abandon: () => Promise<void>;
}

/** pg-boss on either database through `executeSql`. Our own row beside each of its jobs has the same id and holds what a person sees. */
export function openQueue(connection: Connection, runners: readonly JobRunner[], limits: JobLimits = jobLimits): Queue {
	const abandoned = new AbortController();
	let isStopping = false;
	const server = { isStopping: () => isStopping, abandoned: abandoned.signal };
	const running = new Set<Promise<void>>();
	const workerIds = new Map<string, string[]>();
	const known = new Map(runners.map((runner) => [runner.name, runner]));
	const sentIn = new WeakMap<Transaction, Set<string>>();
	let isClosed = false;
	// pg-boss does not wait for all of its own queries: after the end they must neither run nor reject.
	const executeSql: ExecuteSql = (text, values) => (isClosed ? new Promise(() => undefined) : connection.executeSql(text, values));
	const boss = new PgBoss({ db: { executeSql }, schedule: false });
	boss.on('error', (error) => console.error('The job queue reports:', error));

	const work = async (platform: Platform, runner: JobRunner): Promise<string> =>
		boss.work<object>(runner.name, { includeMetadata: true, batchSize: 1, pollingIntervalSeconds: 2 }, async ([job]) => {
			if (job === undefined) return;
			const oneTry = { jobId: job.id, input: job.data, isLastTry: job.retryCount >= job.retryLimit };
			const run = runJob(platform, runner, oneTry, server, limits);
			running.add(run);
			await run.finally(() => running.delete(run));
		});

	return {
		jobs: {
			enqueue: async (tx, definition, input) => {
				if (!known.has(definition.name)) throw new Error(`No runner is known for the job ${definition.name}.`);
				const options = { id: input.jobId, retryLimit, retryDelay: 1, expireInSeconds: Math.ceil(limits.longestMs / 1000) + 60 };
				const jobId = await boss.send(definition.name, input, { ...options, db: { executeSql: executeSqlIn(tx) } });
				if (jobId === null) throw new Error(`The job ${definition.name} ${input.jobId} was not taken by the queue.`);
				sentIn.get(tx)?.add(definition.name);
			},
		},
		transaction: async (work) => {
			const sent = new Set<string>();
			const result = await connection.db.transaction((tx) => {
				sentIn.set(tx, sent);
				return work(tx);
			});
			for (const workerId of [...sent].flatMap((name) => workerIds.get(name) ?? [])) boss.notifyWorker(workerId);
			return result;
		},
		start: async (platform) => {
			await boss.start();
			for (const { name } of runners) await boss.createQueue(name);
			await settleLeftOverJobs(platform, boss, executeSql, known);
			for (const runner of runners) {
				const ids = await Promise.all(Array.from({ length: atOnce }, () => work(platform, runner)));
				workerIds.set(runner.name, ids);
			}
		},
		stop: async () => {
			isStopping = true;
			await boss.stop({ graceful: false });
			isClosed = true;
		},
		abandon: async () => {
			abandoned.abort();
			const patience = new AbortController();
			await Promise.race([Promise.allSettled(running), setTimeout(2000, undefined, { signal: patience.signal })]);
			patience.abort();
		},
	};
}
