import { eq, max } from 'drizzle-orm';
import { checkJobs } from '#shared/check/jobs.ts';
import { lockSite } from '../../db/lock-site.ts';
import { checkFits, checks } from '../../db/schema/check.ts';
import { audit } from '../../platform/audit.ts';
import { startJob } from '../../platform/job-row.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict } from '../../platform/refuse.ts';
import { type AskedCheck, type CheckInputs, checkInputs, checkInputsSha256 } from './check-inputs.ts';
import { engineVersion } from './engine-version.ts';

/** Begins a check on the adopted fits of the survey's set-ups; a job computes it. It starts as a trial. */
export async function runCheck(platform: Platform, member: Member, asked: AskedCheck): Promise<{ checkId: string; jobId: string }> {
	const { siteId } = member;
	// Hashed before the transaction; inside, the same inputs are asked for again.
	const seen = await checkInputs(platform.db, siteId, asked);
	const inputsSha256 = await checkInputsSha256(seen);
	const [checkId, jobId] = [platform.newId(), platform.newId()];
	await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const inputs = await checkInputs(tx, siteId, asked);
		if (fitsOf(inputs) !== fitsOf(seen)) throw new Conflict('Another fit was adopted a moment ago. Look again, then check.');
		if (JSON.stringify([inputs.leftOut, inputs.said]) !== JSON.stringify([seen.leftOut, seen.said]))
			throw new Conflict('Someone chose, named or placed checkpoints a moment ago. Look again, then check.');
		if (JSON.stringify(inputs.voidedRows) !== JSON.stringify(seen.voidedRows))
			throw new Conflict('Points were voided or taken back a moment ago. Look again, then check.');
		const [row] = await tx
			.select({ highest: max(checks.number) })
			.from(checks)
			.where(eq(checks.siteId, siteId));
		const number = (row?.highest ?? 0) + 1;
		await startJob(platform, tx, member, checkJobs.computeCheck, { jobId, siteId, checkId }, { subjectId: checkId });
		await tx.insert(checks).values({
			id: checkId,
			siteId,
			number,
			...asked,
			stage: inputs.survey.stage,
			state: 'computing',
			jobId,
			leftOut: inputs.leftOut.length > 0 ? inputs.leftOut : null,
			inputsSha256,
			engineVersion,
			madeBy: member.userId,
			madeAt: platform.now(),
		});
		const carriedBy = inputs.withFit.map(({ setup, fit }) => ({ checkId, siteId, setupId: setup.id, fitId: fit.id }));
		await tx.insert(checkFits).values(carriedBy);
		await audit(tx, member, { kind: 'check-run', subjectId: checkId, data: { number, ...asked, inputsSha256 } });
	});
	return { checkId, jobId };
}

const fitsOf = ({ withFit }: CheckInputs): string => withFit.map(({ fit }) => fit.id).join(' ');
