import { and, asc, eq, inArray, sql } from 'drizzle-orm';
import { sha256OfJson } from '#shared/record/sha256.ts';
import type { Handle } from '../../db/database.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { revisions } from '../../db/schema/model.ts';
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
		.where(eq(setups.surveyId, surveyId))
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
	return { revision, survey, sheet, withFit };
}

/** SHA-256 over all that a check rests on, each by its hash: the same inputs and engine give the same result. */
export function checkInputsSha256({ revision, survey, sheet, withFit }: CheckInputs): Promise<string> {
	return sha256OfJson({
		engineVersion,
		modelFileSha256: revision.fileSha256,
		surveyFileSha256: survey.fileSha256,
		stage: survey.stage,
		sheetSha256: sheet.contentSha256,
		setups: withFit.map(({ setup, fit, controlFileSha256 }) => ({
			name: setup.name,
			commonMm: setup.commonMm,
			pointSigmaM: [setup.pointSigmaPlanM, setup.pointSigmaHeightM],
			fitInputsSha256: fit.inputsSha256,
			controlFileSha256,
		})),
	});
}
