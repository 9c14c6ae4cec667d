import { readFile } from 'node:fs/promises';
import type { InferContractRouterInputs } from '@orpc/contract';
import { eq, max } from 'drizzle-orm';
import type { surveyContract } from '#shared/survey/contract.ts';
import { surveyJobs } from '#shared/survey/jobs.ts';
import { levelRunOf } from '#shared/survey/level-run.ts';
import { hasHeightsAlone } from '#shared/survey/read-point-table.ts';
import { pointTableLimits } from '#shared/survey/table-bytes.ts';
import type { Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { setups, surveys } from '../../db/schema/survey.ts';
import { audit } from '../../platform/audit.ts';
import { startJob } from '../../platform/job-row.ts';
import { keepUpload } from '../../platform/keep-upload.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Refused } from '../../platform/refuse.ts';
import { takeUpload, useUpload } from '../../platform/uploads.ts';
import { insertPoints } from './insert-points.ts';
import { readSurvey, type SurveyReading, whySetupsDiffer } from './read-survey.ts';

type StoreSurvey = InferContractRouterInputs<typeof surveyContract>['store'];

/** More rows than this are read in a thread and stored by a job. */
export const rowsInRequest = 10_000;

/**
 * Reads an uploaded point file as it was said to be read and stores it as the site's next survey, with its set-ups: all rows or none.
 * A long file is stored by a job. With any fault the faults are answered, and the upload may be tried again. `besides` writes into the
 * same transaction.
 */
export async function storeSurvey(
	platform: Platform,
	member: Member,
	{ uploadId, survey, setups: setupForms, reading }: StoreSurvey,
	besides: (tx: Transaction) => Promise<void>,
): Promise<{ ok: true; surveyId: string; jobId: string | null } | ({ ok: false } & SurveyReading)> {
	const { siteId } = member;
	const upload = await takeUpload(platform, member, uploadId);
	if (upload.bytes > pointTableLimits.bytes) {
		throw new Refused('too-large', `A point file has at most ${pointTableLimits.bytes / 1024 / 1024} MB; this one has more.`, 'uploadId');
	}
	const unsaid = hasHeightsAlone(reading) ? setupForms.find(({ observation }) => levelRunOf(observation) === null) : undefined;
	if (unsaid !== undefined) {
		throw new Refused(
			'level-run-not-said',
			`The file has heights alone, so set-up ${unsaid.name} is a level run. Say its starting and closing benchmark, its length and its misclosure, or name the columns of easting and northing.`,
			'setups',
		);
	}
	const names = setupForms.map(({ name }) => name);
	const bytes = await readFile(upload.path);
	const read = hasMoreLines(bytes, rowsInRequest) ? null : readSurvey(bytes, reading);
	if (read !== null && read.faultCount > 0) return { ok: false, ...read };
	// Of a long file only the form is known yet; the job compares.
	const differ = whySetupsDiffer(read?.points.setup ?? names, names);
	if (differ !== null) throw new Refused('setups-differ', differ, 'setups');
	const kept = await keepUpload(platform, upload);
	const surveyId = platform.newId();
	const jobId = read === null ? platform.newId() : null;
	const now = platform.now();
	await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		await useUpload(tx, uploadId, kept, now);
		if (jobId !== null) await startJob(platform, tx, member, surveyJobs.storePoints, { jobId, siteId, surveyId }, { subjectId: surveyId });
		const [row] = await tx
			.select({ highest: max(surveys.number) })
			.from(surveys)
			.where(eq(surveys.siteId, siteId));
		const number = (row?.highest ?? 0) + 1;
		await tx.insert(surveys).values({
			id: surveyId,
			siteId,
			number,
			...survey,
			fileName: upload.fileName,
			fileSha256: kept.sha256,
			reading,
			state: read === null ? 'storing' : 'ready',
			jobId,
			storedBy: member.userId,
			storedAt: now,
		});
		const setupIds = new Map(names.map((name) => [name, platform.newId()]));
		await tx.insert(setups).values(
			setupForms.map(({ pointSigmaM, ...setup }) => ({
				id: setupIds.get(setup.name) ?? platform.newId(),
				siteId,
				surveyId,
				name: setup.name,
				levelling: setup.levelling,
				bringsScale: setup.bringsScale,
				pointSigmaPlanM: pointSigmaM?.plan ?? null,
				pointSigmaHeightM: pointSigmaM?.height ?? null,
				commonMm: setup.commonMm,
				instrumentHeightM: setup.instrumentHeightM,
				observation: setup.observation ?? null,
			})),
		);
		await besides(tx);
		if (read === null) return;
		await insertPoints(tx, surveyId, setupIds, read.points);
		const data = { number, name: survey.name, fileSha256: kept.sha256, points: read.points.row.length };
		await audit(tx, member, { kind: 'survey-stored', subjectId: surveyId, data });
	});
	return { ok: true, surveyId, jobId };
}

/** Counts line ends, whichever kind the file has. */
function hasMoreLines(bytes: Uint8Array, most: number): boolean {
	let [feeds, returns] = [0, 0];
	for (const byte of bytes) {
		if (byte === 10) feeds++;
		else if (byte === 13) returns++;
	}
	return Math.max(feeds, returns) > most;
}
