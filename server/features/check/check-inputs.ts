import { and, asc, eq, inArray, isNotNull, isNull, sql } from 'drizzle-orm';
import type { LeftOutCheckpoint } from '#shared/model/requirement.ts';
import { sha256OfJson } from '#shared/record/sha256.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { addedCheckpoints, checkpointChoices, checkpoints, elementMarks, revisions } from '../../db/schema/model.ts';
import { setups, surveyPoints, surveys } from '../../db/schema/survey.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { engineVersion } from './engine-version.ts';

export interface AskedCheck {
	revisionId: string;
	surveyId: string;
	sheetId: string;
}

export type CheckInputs = Awaited<ReturnType<typeof checkInputs>>;

/**
 * What a check asked for would rest on: the adopted fit of each set-up that has points. NOT_FOUND for another site's; refused where
 * the revision or the survey is not ready, the sheet is not issued, or no set-up has an adopted fit.
 */
export async function checkInputs(db: Handle, siteId: string, { revisionId, surveyId, sheetId }: AskedCheck) {
	const revision = foundOne(
		await db
			.select()
			.from(revisions)
			.where(and(eq(revisions.siteId, siteId), eq(revisions.id, revisionId))),
	);
	const survey = foundOne(
		await db
			.select()
			.from(surveys)
			.where(and(eq(surveys.siteId, siteId), eq(surveys.id, surveyId))),
	);
	const sheet = foundOne(
		await db
			.select()
			.from(sheets)
			.where(and(eq(sheets.siteId, siteId), eq(sheets.id, sheetId))),
	);
	if (revision.state !== 'ready') {
		throw new Refused('revision-not-ready', `Revision ${revision.number} is not read, so there is nothing to check against.`, 'revisionId');
	}
	if (survey.state !== 'ready') throw new Refused('survey-not-ready', `Survey ${survey.number} is not stored whole.`, 'surveyId');
	if (sheet.state !== 'issued') {
		const state = sheet.state === 'draft' ? 'a draft' : 'superseded';
		throw new Refused(
			'sheet-not-issued',
			`Revision ${sheet.revision} of the tolerance sheet is ${state}. Check by the issued one.`,
			'sheetId',
		);
	}
	const sighted = await db
		.select({ setup: setups, pointCount: sql<number>`count(${surveyPoints.row})::int` })
		.from(setups)
		.innerJoin(surveyPoints, eq(surveyPoints.setupId, setups.id))
		.where(and(eq(setups.surveyId, surveyId), isNull(surveyPoints.voidedReason)))
		.groupBy(setups.id)
		.orderBy(asc(setups.name));
	const adopted =
		sighted.length === 0
			? []
			: await db
					.select({ fit: fits, controlFileSha256: controlSets.fileSha256 })
					.from(fits)
					.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
					.where(
						and(
							inArray(
								fits.setupId,
								sighted.map(({ setup }) => setup.id),
							),
							eq(fits.state, 'adopted'),
						),
					);
	const withFit = sighted.flatMap(({ setup }) => {
		const own = adopted.find(({ fit }) => fit.setupId === setup.id);
		return own === undefined ? [] : [{ setup, ...own }];
	});
	if (withFit.length === 0) {
		const names = sighted.map(({ setup }) => setup.name).join(', ');
		throw new Refused(
			'no-fit',
			names === ''
				? `Survey ${survey.number} has no points.`
				: `No set-up of survey ${survey.number} has an adopted fit (${names}). Make a fit of each and adopt it, then check.`,
			'surveyId',
		);
	}
	return {
		revision,
		survey,
		sheet,
		withFit,
		leftOut: await leftOutOf(db, revision),
		said: await saidOf(db, revision.modelId),
		voidedRows: await voidedRowsOf(db, surveyId),
	};
}

/** Rows of the survey's file that are voided, in order: a check passes over them, and the file's hash does not tell. */
async function voidedRowsOf(db: Handle, surveyId: string): Promise<number[]> {
	const rows = await db
		.select({ row: surveyPoints.row })
		.from(surveyPoints)
		.where(and(eq(surveyPoints.surveyId, surveyId), isNotNull(surveyPoints.voidedReason)))
		.orderBy(asc(surveyPoints.row));
	return rows.map(({ row }) => row);
}

/** What persons left out of this revision, in a fixed order: not asked for in the check. */
async function leftOutOf(db: Handle, { id, modelId }: typeof revisions.$inferSelect): Promise<LeftOutCheckpoint[]> {
	const rows = await db
		.select({ checkpointId: checkpointChoices.checkpointId, reason: checkpointChoices.reason, by: users.name })
		.from(checkpointChoices)
		.innerJoin(checkpoints, and(eq(checkpoints.id, checkpointChoices.checkpointId), eq(checkpoints.revisionId, id)))
		.innerJoin(users, eq(users.id, checkpointChoices.chosenBy))
		.where(and(eq(checkpointChoices.modelId, modelId), eq(checkpointChoices.requirement, 'left-out')))
		.orderBy(asc(checkpointChoices.checkpointId));
	return rows.map(({ checkpointId, reason, by }) => ({ checkpointId, reason: reason ?? '', by }));
}

/** Names and checkpoints that persons gave the model: a check meets points by them, and the model's file does not have them. */
async function saidOf(db: Handle, modelId: string): Promise<{ marks: unknown[]; added: unknown[] }> {
	const marks = await db
		.select({ globalId: elementMarks.globalId, mark: elementMarks.mark })
		.from(elementMarks)
		.where(eq(elementMarks.modelId, modelId))
		.orderBy(asc(elementMarks.globalId));
	const added = await db
		.select({ id: addedCheckpoints.id, xM: addedCheckpoints.xM, yM: addedCheckpoints.yM, zM: addedCheckpoints.zM })
		.from(addedCheckpoints)
		.where(eq(addedCheckpoints.modelId, modelId))
		.orderBy(asc(addedCheckpoints.id));
	return { marks, added };
}

/** SHA-256 over all that a check rests on, each by its hash: the same inputs and engine give the same result. */
export function checkInputsSha256({ revision, survey, sheet, withFit, leftOut, said, voidedRows }: CheckInputs): Promise<string> {
	return sha256OfJson({
		engineVersion,
		modelFileSha256: revision.fileSha256,
		surveyFileSha256: survey.fileSha256,
		stage: survey.stage,
		sheetSha256: sheet.contentSha256,
		// Left away where nobody said anything, so that the hashes of checks without them stay what they were.
		...(leftOut.length > 0 ? { leftOut: leftOut.map(({ checkpointId }) => checkpointId) } : {}),
		...(said.marks.length > 0 ? { marks: said.marks } : {}),
		...(said.added.length > 0 ? { addedCheckpoints: said.added } : {}),
		...(voidedRows.length > 0 ? { voidedRows } : {}),
		setups: withFit.map(({ setup, fit, controlFileSha256 }) => ({
			name: setup.name,
			commonMm: setup.commonMm,
			pointSigmaM: [setup.pointSigmaPlanM, setup.pointSigmaHeightM],
			fitInputsSha256: fit.inputsSha256,
			controlFileSha256,
		})),
	});
}
