import { and, asc, desc, eq, inArray, type SQL, sql } from 'drizzle-orm';
import type { SetupSummary, StoredSurveyPoint, SurveySummary } from '#shared/survey/contract.ts';
import { isTargetCode, matchMarks } from '#shared/survey/match-marks.ts';
import type { Handle } from '../../db/database.ts';
import { vectorOf } from '../../db/model-rows.ts';
import { users } from '../../db/schema/account.ts';
import { fits } from '../../db/schema/fit.ts';
import { setups, surveyPoints, surveys } from '../../db/schema/survey.ts';
import { foundOne } from '../../platform/refuse.ts';
import { newestMarks, targetNames } from './target-names.ts';

/** The site's surveys, newest first, each with its set-ups. */
export function surveysOf(db: Handle, siteId: string): Promise<SurveySummary[]> {
	return summariesOf(db, siteId, eq(surveys.siteId, siteId));
}

/** One survey of the site; NOT_FOUND for another site's. */
export async function surveyOf(db: Handle, siteId: string, surveyId: string): Promise<SurveySummary> {
	return foundOne(await summariesOf(db, siteId, and(eq(surveys.siteId, siteId), eq(surveys.id, surveyId))));
}

async function summariesOf(db: Handle, siteId: string, where: SQL | undefined): Promise<SurveySummary[]> {
	const rows = await db
		.select({ survey: surveys, storedBy: users.name })
		.from(surveys)
		.innerJoin(users, eq(users.id, surveys.storedBy))
		.where(where)
		.orderBy(desc(surveys.number));
	const surveyIds = rows.map(({ survey }) => survey.id);
	const ownSetups = surveyIds.length === 0 ? [] : await setupsOf(db, siteId, surveyIds);
	return rows.map(({ survey, storedBy }) => {
		const own = ownSetups.flatMap(({ surveyId, ...setup }) => (surveyId === survey.id ? [setup] : []));
		return {
			surveyId: survey.id,
			number: survey.number,
			name: survey.name,
			stage: survey.stage,
			surveyedOn: survey.surveyedOn,
			observer: survey.observer,
			instrument: survey.instrument,
			serial: survey.serial,
			...(survey.observation === null ? {} : { observation: survey.observation }),
			fileName: survey.fileName,
			fileSha256: survey.fileSha256,
			// What is stored of a survey that is not ready yet is nobody's to count.
			pointCount: survey.state === 'ready' ? own.reduce((sum, { pointCount }) => sum + pointCount, 0) : 0,
			state: survey.state,
			reason: survey.reason,
			jobId: survey.jobId,
			storedBy,
			storedAt: survey.storedAt,
			setups: own,
		};
	});
}

async function setupsOf(db: Handle, siteId: string, surveyIds: readonly string[]): Promise<(SetupSummary & { surveyId: string })[]> {
	const rows = await db
		.select()
		.from(setups)
		.where(inArray(setups.surveyId, [...surveyIds]))
		.orderBy(asc(setups.name));
	const counts = await db
		.select({ setupId: surveyPoints.setupId, count: sql<number>`count(*)::int` })
		.from(surveyPoints)
		.where(inArray(surveyPoints.surveyId, [...surveyIds]))
		.groupBy(surveyPoints.setupId);
	const adopted = await db
		.select({ setupId: fits.setupId, fitId: fits.id })
		.from(fits)
		.where(and(eq(fits.siteId, siteId), eq(fits.state, 'adopted')));
	const targets = await targetNames(db, surveyIds, await newestMarks(db, siteId));
	const countOf = new Map(counts.map(({ setupId, count }) => [setupId, count]));
	return rows.map((setup) => ({
		surveyId: setup.surveyId,
		setupId: setup.id,
		name: setup.name,
		levelling: setup.levelling,
		bringsScale: setup.bringsScale,
		pointSigmaM:
			setup.pointSigmaPlanM === null || setup.pointSigmaHeightM === null
				? null
				: { plan: setup.pointSigmaPlanM, height: setup.pointSigmaHeightM },
		commonMm: setup.commonMm,
		instrumentHeightM: setup.instrumentHeightM,
		...(setup.observation === null ? {} : { observation: setup.observation }),
		pointCount: countOf.get(setup.id) ?? 0,
		targetCount: targets.get(setup.id)?.size ?? 0,
		adoptedFitId: adopted.find(({ setupId }) => setupId === setup.id)?.fitId ?? null,
	}));
}

/** A survey's points in the file's order, a page of them. None while they are being stored. */
export async function pointsOf(
	db: Handle,
	siteId: string,
	{ surveyId, offset, limit }: { surveyId: string; offset: number; limit: number },
): Promise<{ total: number; points: StoredSurveyPoint[] }> {
	const survey = foundOne(
		await db
			.select({ state: surveys.state })
			.from(surveys)
			.where(and(eq(surveys.siteId, siteId), eq(surveys.id, surveyId))),
	);
	if (survey.state !== 'ready') return { total: 0, points: [] };
	const marks = await newestMarks(db, siteId);
	const [counted] = await db.select({ total: sql<number>`count(*)::int` }).from(surveyPoints).where(eq(surveyPoints.surveyId, surveyId));
	const rows = await db
		.select()
		.from(surveyPoints)
		.where(eq(surveyPoints.surveyId, surveyId))
		.orderBy(asc(surveyPoints.row))
		.limit(limit)
		.offset(offset);
	const matched = matchMarks(
		rows.map(({ name }) => name),
		marks,
	);
	return {
		total: counted?.total ?? 0,
		points: rows.map((row) => ({
			row: row.row,
			setupId: row.setupId,
			name: row.name,
			surveyM: [row.xM, row.yM, row.zM],
			sigmaM: row.sigmaM === null ? null : vectorOf(row.sigmaM),
			offsetMm: row.offsetMm,
			code: row.code,
			isTarget: matched.has(row.name) || isTargetCode(row.code),
			...(row.voidedReason === null ? {} : { voidedReason: row.voidedReason }),
		})),
	};
}
