import { and, eq } from 'drizzle-orm';
import { surveyJobs } from '#shared/survey/jobs.ts';
import type { Transaction } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { setups, surveyPoints, surveys } from '../../db/schema/survey.ts';
import { audit } from '../../platform/audit.ts';
import { endOfAborted } from '../../platform/end-of-aborted.ts';
import { runnerOf } from '../../platform/job-runner.ts';
import type { JobContext, JobEnd, Platform } from '../../platform/platform.ts';
import { runInThread } from '../../platform/run-in-thread.ts';
import { insertPoints } from './insert-points.ts';
import type { PointsToRead } from './read-points.worker.ts';
import { type SurveyReading, whySetupsDiffer } from './read-survey.ts';

interface PointsInput {
	siteId: string;
	surveyId: string;
}

/** Short transactions, so that on the embedded database others get their turn between two. */
const rowsPerTransaction = 5000;

/**
 * Reads a long point file in a thread and stores its points. They go in slices while the survey is being stored, which nobody reads; the
 * last step makes it ready, a fault or a cancel takes all of them out again. Run twice it is the same rows once.
 */
export const storePointsRunner = runnerOf(surveyJobs.storePoints, storePoints, async (input, platform, reason) => {
	await fail(platform, input, reason);
});

async function storePoints(input: PointsInput, { platform, report, signal }: JobContext): Promise<JobEnd> {
	const { siteId, surveyId } = input;
	const [survey] = await platform.db
		.select()
		.from(surveys)
		.where(and(eq(surveys.siteId, siteId), eq(surveys.id, surveyId)));
	if (survey?.state !== 'storing') return { state: 'done' };
	report({ doing: 'Reading the points', done: 0, of: 0 });
	const toRead: PointsToRead = { bytes: new Uint8Array(await platform.files.read(survey.fileSha256)), reading: survey.reading };
	let read: SurveyReading;
	try {
		const worker = { file: './read-points.worker.ts', from: import.meta.url };
		read = await runInThread<PointsToRead, SurveyReading>(worker, toRead, { signal, transfer: [toRead.bytes.buffer as ArrayBuffer] });
	} catch (error) {
		if (!signal.aborted) throw error;
		return cancel(platform, input, signal);
	}
	if (read.faultCount > 0) return fail(platform, input, faultsInWords(read));
	const stored = await platform.db.select({ id: setups.id, name: setups.name }).from(setups).where(eq(setups.surveyId, surveyId));
	const setupIds = new Map(stored.map(({ id, name }) => [name, id]));
	const differ = whySetupsDiffer(read.points.setup, [...setupIds.keys()]);
	if (differ !== null) return fail(platform, input, differ);
	const count = read.points.row.length;
	await platform.transaction(async (tx) => {
		await tx.delete(surveyPoints).where(eq(surveyPoints.surveyId, surveyId));
	});
	for (let from = 0; from < count; from += rowsPerTransaction) {
		if (signal.aborted) return cancel(platform, input, signal);
		report({ doing: 'Storing the points', done: from, of: count });
		await platform.transaction((tx) => insertPoints(tx, surveyId, setupIds, read.points, from, from + rowsPerTransaction));
	}
	await platform.transaction(async (tx) => {
		if (!(await endStoring(tx, input, { state: 'ready' }))) return;
		const data = { number: survey.number, name: survey.name, fileSha256: survey.fileSha256, points: count };
		await audit(tx, await storerOf(tx, surveyId), { kind: 'survey-stored', subjectId: surveyId, data }, siteId);
	});
	return { state: 'done' };
}

function faultsInWords({ rowCount, faults, faultCount }: SurveyReading): string {
	const first = faults[0]?.message ?? '';
	if (rowCount === 0) return `${first} Nothing was stored.`;
	return `${faultCount} ${faultCount === 1 ? 'row' : 'rows'} of ${rowCount} cannot be read; nothing was stored. The first: ${first}`;
}

function cancel(platform: Platform, input: PointsInput, signal: AbortSignal): Promise<JobEnd> {
	return endOfAborted(platform, signal, (tx) => takeOut(tx, input, 'Storing was cancelled; nothing was kept.'));
}

async function fail(platform: Platform, input: PointsInput, reason: string): Promise<JobEnd> {
	await platform.transaction(async (tx) => {
		if (!(await takeOut(tx, input, reason))) return;
		const entry = { kind: 'survey-failed', subjectId: input.surveyId, data: { reason } } as const;
		await audit(tx, await storerOf(tx, input.surveyId), entry, input.siteId);
	});
	return { state: 'failed', reason };
}

async function takeOut(tx: Transaction, input: PointsInput, reason: string): Promise<boolean> {
	if (!(await endStoring(tx, input, { state: 'failed', reason }))) return false;
	await tx.delete(surveyPoints).where(eq(surveyPoints.surveyId, input.surveyId));
	return true;
}

async function endStoring(
	tx: Transaction,
	{ siteId, surveyId }: PointsInput,
	end: { state: 'ready' } | { state: 'failed'; reason: string },
): Promise<boolean> {
	const ended = await tx
		.update(surveys)
		.set(end)
		.where(and(eq(surveys.siteId, siteId), eq(surveys.id, surveyId), eq(surveys.state, 'storing')))
		.returning({ id: surveys.id });
	return ended.length > 0;
}

/** On whose wish the job runs. */
async function storerOf(tx: Transaction, surveyId: string): Promise<{ userId: string; name: string; email: string }> {
	const [storer] = await tx
		.select({ userId: users.id, name: users.name, email: users.email })
		.from(surveys)
		.innerJoin(users, eq(users.id, surveys.storedBy))
		.where(eq(surveys.id, surveyId));
	if (storer === undefined) throw new Error(`Nobody stored survey ${surveyId}.`);
	return storer;
}
