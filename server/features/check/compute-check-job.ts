import { and, eq } from 'drizzle-orm';
import type { CheckInput, CheckOutput } from '#shared/check/check-input.ts';
import { checkJobs } from '#shared/check/jobs.ts';
import type { Finding } from '#shared/fit/fit-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { checks } from '../../db/schema/check.ts';
import { audit } from '../../platform/audit.ts';
import { endOfAborted } from '../../platform/end-of-aborted.ts';
import { runnerOf } from '../../platform/job-runner.ts';
import type { JobContext, JobEnd, Platform } from '../../platform/platform.ts';
import { runInThread } from '../../platform/run-in-thread.ts';
import { type LoadedCheck, loadCheck } from './load-check.ts';
import { storeDeviations } from './store-deviations.ts';

interface CheckJobInput {
	siteId: string;
	checkId: string;
}

/** Computes a check in a thread and stores its deviations, whole or not at all. Run twice it is the same rows once. */
export const computeCheckRunner = runnerOf(checkJobs.computeCheck, computeCheck, async (input, platform, reason) => {
	await fail(platform, input, reason);
});

async function computeCheck(input: CheckJobInput, { platform, report, signal }: JobContext): Promise<JobEnd> {
	const [check] = await platform.db
		.select()
		.from(checks)
		.where(and(eq(checks.siteId, input.siteId), eq(checks.id, input.checkId)));
	if (check?.state !== 'computing') return { state: 'done' };
	report({ doing: 'Reading the points', done: 0, of: 0 });
	const loaded = await loadCheck(platform.db, check);
	let output: CheckOutput;
	try {
		const worker = { file: './compute-check.worker.ts', from: import.meta.url };
		output = await runInThread<CheckInput, CheckOutput>(worker, loaded.input, {
			signal,
			onProgress: ({ done, of }) => report({ doing: 'Holding points against the design', done, of }),
		});
	} catch (error) {
		if (!signal.aborted) throw error;
		return endOfAborted(platform, signal, (tx) => endCheck(tx, input, 'The check was cancelled.'));
	}
	if (output.deviations.every(({ measured }) => measured === null)) return fail(platform, input, whyNothingMet(loaded, output));
	report({ doing: 'Storing the deviations', done: output.deviations.length, of: output.deviations.length });
	const findings = [...withoutFitFindings(loaded), ...output.findings];
	await platform.transaction(async (tx) => {
		const { summary, unmatchedPoints, derived } = output;
		const stored = await tx
			.update(checks)
			.set({ state: 'trial', summary, findings, unmatchedPoints, derived })
			.where(and(eq(checks.id, input.checkId), eq(checks.state, 'computing')))
			.returning({ id: checks.id });
		if (stored.length === 0) return;
		await storeDeviations(tx, check, output.deviations);
		await audit(
			tx,
			await makerOf(tx, input.checkId),
			{ kind: 'check-computed', subjectId: input.checkId, data: { summary } },
			input.siteId,
		);
	});
	return { state: 'done' };
}

/** Why no point met a checkpoint: the likeliest cause, where one was found, and what was most often wrong. */
function whyNothingMet({ input }: LoadedCheck, { findings, unmatchedPoints }: CheckOutput): string {
	const points = input.points.length;
	if (points === 0) return 'Apart from targets the survey has no points, so nothing could be checked. Store a survey of the work itself.';
	const counts = new Map<string, number>();
	for (const { reason } of unmatchedPoints) counts.set(reason, (counts.get(reason) ?? 0) + 1);
	const [commonest] = [...counts].sort(([, one], [, other]) => other - one);
	const likeliest = findings.find(({ code }) => code === 'units' || code === 'frame') ?? findings[0];
	const seen = commonest === undefined ? '' : ` Of ${commonest[1]}: ${commonest[0]}.`;
	const cause = likeliest === undefined ? '' : ` ${likeliest.message}`;
	return `None of the ${points} points met a checkpoint, so nothing was checked.${seen}${cause}`;
}

function withoutFitFindings({ withoutFit }: LoadedCheck): Finding[] {
	return withoutFit.map(({ name, pointCount }) => ({
		code: 'setup-without-fit',
		pairs: [],
		message: `Set-up ${name} has no adopted fit: its ${pointCount} ${pointCount === 1 ? 'point was' : 'points were'} not used.`,
		evidence: { setup: name, pointCount },
	}));
}

async function fail(platform: Platform, input: CheckJobInput, reason: string): Promise<JobEnd> {
	await platform.transaction(async (tx) => {
		if (!(await endCheck(tx, input, reason))) return;
		const entry = { kind: 'check-failed', subjectId: input.checkId, data: { reason } } as const;
		await audit(tx, await makerOf(tx, input.checkId), entry, input.siteId);
	});
	return { state: 'failed', reason };
}

async function endCheck(tx: Transaction, { siteId, checkId }: CheckJobInput, reason: string): Promise<boolean> {
	const ended = await tx
		.update(checks)
		.set({ state: 'failed', reason })
		.where(and(eq(checks.siteId, siteId), eq(checks.id, checkId), eq(checks.state, 'computing')))
		.returning({ id: checks.id });
	return ended.length > 0;
}

/** On whose wish the job runs. */
async function makerOf(tx: Transaction, checkId: string): Promise<{ userId: string; name: string; email: string }> {
	const [maker] = await tx
		.select({ userId: users.id, name: users.name, email: users.email })
		.from(checks)
		.innerJoin(users, eq(users.id, checks.madeBy))
		.where(eq(checks.id, checkId));
	if (maker === undefined) throw new Error(`Nobody asked for check ${checkId}.`);
	return maker;
}
