import { setTimeout } from 'node:timers/promises';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { z } from 'zod';
import type { JobProgress } from '#shared/job/contract.ts';
import { jobs } from '../../server/db/schema/job.ts';
import { memberships } from '../../server/db/schema/site.ts';
import { startJob } from '../../server/platform/job-row.ts';
import { runnerOf } from '../../server/platform/job-runner.ts';
import type { JobContext, JobEnd, Member } from '../../server/platform/platform.ts';
import { openTestServer, type TestServer } from './harness.ts';

const definition = { name: 'test.work', input: z.object({ jobId: z.uuid(), siteId: z.uuid(), word: z.string() }) };
type Input = z.infer<typeof definition.input>;

/** What the runner does in the test at hand, by job. */
const doings = new Map<string, (input: Input, context: JobContext) => Promise<JobEnd>>();
const givenUp = new Map<string, string>();
const runner = runnerOf(
	definition,
	(input, context) => doings.get(input.jobId)!(input, context),
	async ({ jobId }, _platform, reason) => {
		givenUp.set(jobId, reason);
	},
);

let server: TestServer;
let siteId: string;
let engineer: Member & { cookie: string; api: ReturnType<TestServer['api']> };
beforeAll(async () => {
	server = await openTestServer({}, [runner]);
	siteId = await server.addSite();
	engineer = await server.addMember(siteId, ['site-engineer']);
});
afterAll(() => server.close());

async function begin(doing: (input: Input, context: JobContext) => Promise<JobEnd>, onSent?: () => void): Promise<string> {
	const jobId = server.platform.newId();
	doings.set(jobId, doing);
	await server.platform.transaction(async (tx) => {
		await startJob(server.platform, tx, engineer, definition, { jobId, siteId, word: 'brick' }, { subjectId: siteId });
		onSent?.();
	});
	return jobId;
}

async function untilEnded(jobId: string): Promise<JobProgress[]> {
	const seen: JobProgress[] = [];
	for await (const progress of await engineer.api.job.follow({ siteId, jobId })) seen.push(progress);
	return seen;
}

describe('a job', () => {
	it('starts after the commit, is told of as it goes, and ends', async () => {
		let goOn = () => {};
		const isSeen = new Promise<void>((resolve) => {
			goOn = resolve;
		});
		const jobId = await begin(async ({ word }, { report }) => {
			report({ doing: `Laying ${word} 1`, done: 1, of: 2 });
			// Goes on once it was told of: how soon depends on the machine.
			await isSeen;
			report({ doing: `Laying ${word} 2`, done: 2, of: 2 });
			return { state: 'done' };
		});
		const seen: JobProgress[] = [];
		for await (const progress of await engineer.api.job.follow({ siteId, jobId })) {
			seen.push(progress);
			if (progress.doing === 'Laying brick 1') goOn();
		}
		expect(seen.at(-1)).toMatchObject({
			jobId,
			kind: 'test.work',
			state: 'done',
			doing: 'Laying brick 2',
			done: 2,
			of: 2,
			reason: null,
			subjectId: siteId,
		});
	});

	it('is told of no more to who was taken off the site while listening', async () => {
		const leaver = await server.addMember(siteId, ['site-engineer']);
		let letGo = () => {};
		const jobId = await begin(async ({ word }, { report, signal }) => {
			report({ doing: `Laying ${word}`, done: 0, of: 1 });
			await new Promise<void>((resolve) => {
				letGo = resolve;
				signal.addEventListener('abort', () => resolve());
			});
			return { state: 'done' };
		});
		const states: string[] = [];
		for await (const { state, doing } of await leaver.api.job.follow({ siteId, jobId })) {
			states.push(state);
			if (doing === 'Laying brick')
				await server.platform.db.update(memberships).set({ leftAt: server.platform.now() }).where(eq(memberships.userId, leaver.userId));
		}
		letGo();
		// The stream ended while the job went on.
		expect(states).not.toContain('done');
		expect((await untilEnded(jobId)).at(-1)?.state).toBe('done');
	});

	it('is not there where its transaction was rolled back', async () => {
		let hasRun = false;
		const begun = begin(
			async () => {
				hasRun = true;
				return { state: 'done' };
			},
			() => {
				throw new Error('rolled back');
			},
		);
		await expect(begun).rejects.toThrow('rolled back');
		await setTimeout(300);
		expect(hasRun).toBe(false);
		const left = await server.platform.db.$count(jobs, eq(jobs.doing, 'Waiting for its turn'));
		expect(left).toBe(0);
	});

	it('is not begun where nobody could run it', async () => {
		const unknown = { name: 'test.unknown', input: definition.input };
		const jobId = server.platform.newId();
		const begun = server.platform.transaction((tx) =>
			startJob(server.platform, tx, engineer, unknown, { jobId, siteId, word: '' }, { subjectId: siteId }),
		);
		await expect(begun).rejects.toThrow('No runner is known for the job test.unknown.');
		expect(await server.platform.db.$count(jobs, eq(jobs.id, jobId))).toBe(0);
	});

	it('that is refused says why and is not tried again', async () => {
		let runs = 0;
		const jobId = await begin(async () => {
			runs += 1;
			return { state: 'failed', reason: 'This file holds no walls.' };
		});
		expect((await untilEnded(jobId)).at(-1)).toMatchObject({ state: 'failed', reason: 'This file holds no walls.' });
		await setTimeout(2500);
		expect(runs).toBe(1);
	});

	it('that throws is tried three times, then fails with a sentence and what it made is given up', async () => {
		let runs = 0;
		const jobId = await begin(async () => {
			runs += 1;
			throw new Error('secret detail of ours');
		});
		const end = (await untilEnded(jobId)).at(-1)!;
		expect(runs).toBe(3);
		expect(end.state).toBe('failed');
		expect(end.reason).toMatch(/Nothing of it was kept/);
		expect(end.reason).not.toContain('secret');
		expect(givenUp.get(jobId)).toBe(end.reason);
	}, 20_000);

	it('that throws once and then does its work is done', async () => {
		let runs = 0;
		const jobId = await begin(async () => {
			runs += 1;
			if (runs === 1) throw new Error('a hiccup');
			return { state: 'done' };
		});
		expect((await untilEnded(jobId)).at(-1)).toMatchObject({ state: 'done', reason: null });
		expect(runs).toBe(2);
	}, 20_000);

	it('heeds a cancel between its steps', async () => {
		const jobId = await begin(async (_input, { signal }) => {
			while (!signal.aborted) await setTimeout(20);
			return { state: 'cancelled' };
		});
		await expect.poll(() => engineer.api.job.get({ siteId, jobId })).toMatchObject({ state: 'running' });
		await engineer.api.job.cancel({ siteId, jobId });
		expect((await untilEnded(jobId)).at(-1)).toMatchObject({ state: 'cancelled', reason: null });
		expect(await engineer.api.job.cancel({ siteId, jobId })).toMatchObject({ state: 'cancelled' });
	});

	it('that ends although a cancel was wished is done: what was stored is not called cancelled', async () => {
		const jobId = await begin(async (_input, { signal }) => {
			while (!signal.aborted) await setTimeout(20);
			return { state: 'done' };
		});
		await engineer.api.job.cancel({ siteId, jobId });
		expect((await untilEnded(jobId)).at(-1)).toMatchObject({ state: 'done' });
	});

	it('is followed and cancelled only on its own site', async () => {
		const jobId = await begin(async () => ({ state: 'done' }));
		const elsewhere = await server.addMember(await server.addSite('Another'), ['site-engineer']);
		const asked = [
			elsewhere.api.job.get({ siteId: elsewhere.siteId, jobId }),
			elsewhere.api.job.cancel({ siteId: elsewhere.siteId, jobId }),
			elsewhere.api.job.follow({ siteId: elsewhere.siteId, jobId }),
			elsewhere.api.job.get({ siteId, jobId }),
		];
		await Promise.all(asked.map((answer) => expect(answer).rejects.toMatchObject({ code: 'NOT_FOUND' })));
	});
});
