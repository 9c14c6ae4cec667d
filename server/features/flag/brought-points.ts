import { readFile } from 'node:fs/promises';
import { and, asc, desc, eq, inArray, isNotNull, isNull, or } from 'drizzle-orm';
import type { BroughtPoints, FlagDetail } from '#shared/flag/contract.ts';
import { mayAct, maySeeFlag } from '#shared/flag/may-act.ts';
import { inspectPointTable } from '#shared/survey/inspect-point-table.ts';
import type { Handle } from '../../db/database.ts';
import { readMeasurements } from '../../db/read-measurements.ts';
import { users } from '../../db/schema/account.ts';
import { checks } from '../../db/schema/check.ts';
import { broughtPoints, flags } from '../../db/schema/flag.ts';
import { companies } from '../../db/schema/site.ts';
import { surveys } from '../../db/schema/survey.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Forbidden, foundOne, NotFound, Refused } from '../../platform/refuse.ts';
import { takeUpload, useUpload } from '../../platform/uploads.ts';
import type { FlagRow } from './flag-rows.ts';

/** A list of points for one element; a site's own surveys come as surveys. */
const largestBytes = 5_000_000;

/**
 * Keeps the points a contractor brings to its own flag, as they came; nothing is measured by them until a site engineer has stored and fitted them.
 * FORBIDDEN on another's flag, REFUSED for one that is settled, for what is no list of points, and for the same file twice.
 */
export async function bringPoints(platform: Platform, member: Member, flag: FlagRow, uploadId: string): Promise<{ broughtId: string }> {
	const { companyId } = flag;
	if (!mayAct(member, 'answer', flag) || companyId === null) throw new Forbidden();
	if (flag.state !== 'open' && flag.state !== 'answered')
		throw new Refused('not-now', `Flag ${flag.number} is decided already, so points of your own come too late. Nothing was kept.`);
	const upload = await takeUpload(platform, member, uploadId);
	if (upload.bytes > largestBytes)
		throw new Refused(
			'too-large',
			`${upload.fileName} has ${Math.ceil(upload.bytes / 1e6)} MB; at most ${largestBytes / 1e6} are taken.`,
			'uploadId',
		);
	const seen = inspectPointTable(new Uint8Array(await readFile(upload.path)));
	if ('refused' in seen)
		throw new Refused('not-points', `${upload.fileName} is no list of points that can be read. Nothing was kept.`, 'uploadId');
	const kept = await platform.files.keepFrom(upload.path);
	const now = platform.now();
	const broughtId = platform.newId();
	try {
		await platform.transaction(async (tx) => {
			await useUpload(tx, uploadId, kept, now);
			await tx.insert(broughtPoints).values({
				id: broughtId,
				siteId: member.siteId,
				flagId: flag.id,
				companyId,
				fileName: upload.fileName,
				fileSha256: kept.sha256,
				broughtBy: member.userId,
				broughtAt: now,
			});
			const data = { number: flag.number, fileName: upload.fileName, fileSha256: kept.sha256 };
			await audit(tx, member, { kind: 'flag-points-brought', subjectId: flag.id, data });
		});
	} catch (error) {
		if (!isUniqueViolation(error, 'brought_points_once')) throw error;
		throw new Refused('points-there', `Flag ${flag.number} has these very points already.`, 'uploadId');
	}
	return { broughtId };
}

/** Names the survey that brought points were stored as. REFUSED where a published check rests on it; CONFLICT where one is named already. */
export async function storePoints(platform: Platform, member: Member, broughtId: string, surveyId: string): Promise<Record<string, never>> {
	const { siteId, userId } = member;
	await platform.transaction(async (tx) => {
		const { brought, number } = foundOne(
			await tx
				.select({ brought: broughtPoints, number: flags.number })
				.from(broughtPoints)
				.innerJoin(flags, eq(flags.id, broughtPoints.flagId))
				.where(and(eq(broughtPoints.siteId, siteId), eq(broughtPoints.id, broughtId))),
		);
		const survey = foundOne(
			await tx
				.select({ number: surveys.number })
				.from(surveys)
				.where(and(eq(surveys.siteId, siteId), eq(surveys.id, surveyId))),
		);
		const published = await tx
			.select({ number: checks.number })
			.from(checks)
			.where(and(eq(checks.siteId, siteId), eq(checks.surveyId, surveyId), eq(checks.state, 'published')));
		if (published[0] !== undefined)
			throw new Refused(
				'already-published',
				`Check ${published[0].number} by survey ${survey.number} is published, so it is no survey to be shown beside.`,
				'surveyId',
			);
		const named = await tx
			.update(broughtPoints)
			.set({ surveyId, storedBy: userId })
			.where(and(eq(broughtPoints.id, broughtId), isNull(broughtPoints.surveyId)))
			.returning({ id: broughtPoints.id });
		if (named.length === 0) throw new Conflict('A survey is named for these points already.');
		const data = { number, survey: survey.number, fileSha256: brought.fileSha256 };
		await audit(tx, member, { kind: 'flag-points-stored', subjectId: brought.flagId, data });
	});
	return {};
}

/** The file as it was brought, for who sees its flag. */
export async function broughtFileOf({ db, files }: Platform, member: Member, broughtId: string): Promise<File> {
	const { brought, flag } = foundOne(
		await db
			.select({ brought: broughtPoints, flag: flags })
			.from(broughtPoints)
			.innerJoin(flags, eq(flags.id, broughtPoints.flagId))
			.where(and(eq(broughtPoints.siteId, member.siteId), eq(broughtPoints.id, broughtId))),
	);
	if (!maySeeFlag(member, flag)) throw new NotFound();
	return new File([new Uint8Array(await files.read(brought.fileSha256))], brought.fileName, { type: 'application/octet-stream' });
}

/** What was brought to this flag, and by the survey its answer names; each with what a check by it found of the flag's element and kind. */
export async function broughtTo(db: Handle, row: FlagRow): Promise<BroughtPoints[]> {
	const named = row.answer?.kind === 'contest' ? row.answer.ownSurveyId : null;
	const rows = await db
		.select({ brought: broughtPoints, companyName: companies.name, by: users.name, surveyNumber: surveys.number })
		.from(broughtPoints)
		.innerJoin(companies, eq(companies.id, broughtPoints.companyId))
		.innerJoin(users, eq(users.id, broughtPoints.broughtBy))
		.leftJoin(surveys, eq(surveys.id, broughtPoints.surveyId))
		.where(
			and(
				eq(broughtPoints.siteId, row.siteId),
				or(eq(broughtPoints.flagId, row.id), named === null ? undefined : eq(broughtPoints.surveyId, named)),
			),
		)
		.orderBy(asc(broughtPoints.broughtAt));
	const found: BroughtPoints[] = [];
	for (const { brought, companyName, by, surveyNumber } of rows) {
		const checkId = brought.surveyId === null ? null : await newestCheckBy(db, row.siteId, brought.surveyId);
		const measured =
			checkId === null ? [] : await readMeasurements(db, { siteId: row.siteId, globalIds: [row.globalId], withCheckId: checkId });
		const { id: broughtId, fileName, fileSha256, broughtAt, surveyId } = brought;
		const own = measured.filter(
			(one) =>
				one.checkId === checkId &&
				one.modelId === row.modelId &&
				one.deviation.characteristic === row.kind &&
				one.deviation.deviationMm !== null,
		);
		found.push({
			...{ broughtId, fileName, fileSha256, broughtAt, surveyId, companyName, surveyNumber, checkId },
			broughtBy: by,
			deviations: own.map(({ deviation }) => deviation),
		});
	}
	return found;
}

/** Surveys that were stored of points of this company: what a contest may name. */
export async function ownSurveysOf(db: Handle, siteId: string, companyId: string | null): Promise<FlagDetail['ownSurveys']> {
	if (companyId === null) return [];
	return db
		.selectDistinct({ surveyId: surveys.id, number: surveys.number, name: surveys.name })
		.from(broughtPoints)
		.innerJoin(surveys, eq(surveys.id, broughtPoints.surveyId))
		.where(and(eq(broughtPoints.siteId, siteId), eq(broughtPoints.companyId, companyId), isNotNull(broughtPoints.surveyId)))
		.orderBy(asc(surveys.number));
}

async function newestCheckBy(db: Handle, siteId: string, surveyId: string): Promise<string | null> {
	const [newest] = await db
		.select({ id: checks.id })
		.from(checks)
		.where(and(eq(checks.siteId, siteId), eq(checks.surveyId, surveyId), inArray(checks.state, ['trial', 'published'])))
		.orderBy(desc(checks.number))
		.limit(1);
	return newest?.id ?? null;
}
