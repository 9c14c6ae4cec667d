import { and, asc, eq, inArray } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { EndedInputs } from '#shared/pour/what-touches.ts';
import type { RecordedCheck, ShownPour } from '#shared/record/sealed-record.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { checkFits, checks } from '../../db/schema/check.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { models, revisions } from '../../db/schema/model.ts';
import { setups, surveys } from '../../db/schema/survey.ts';
import { sheets } from '../../db/schema/tolerance.ts';

/** What a pour's figures rest on, and who prepared it. */
export interface PourInputs {
	checks: { checkId: string; revisionId: string; sheetId: string; recorded: RecordedCheck }[];
	preparedBy: { userId: string; what: string }[];
}

const publisher = alias(users, 'publisher');
const issuer = alias(users, 'issuer');
const maker = alias(users, 'maker');
const adopter = alias(users, 'adopter');
const checker = alias(users, 'checker');

/** These published checks whole, in the order of their numbers. */
export async function pourInputs(db: Handle, siteId: string, checkIds: readonly string[]): Promise<PourInputs> {
	if (checkIds.length === 0) return { checks: [], preparedBy: [] };
	const rows = await db
		.select({
			check: checks,
			survey: surveys,
			revision: revisions,
			modelName: models.name,
			sheet: sheets,
			publishedBy: publisher.name,
			issuedBy: issuer.name,
		})
		.from(checks)
		.innerJoin(surveys, eq(surveys.id, checks.surveyId))
		.innerJoin(revisions, eq(revisions.id, checks.revisionId))
		.innerJoin(models, eq(models.id, revisions.modelId))
		.innerJoin(sheets, eq(sheets.id, checks.sheetId))
		.leftJoin(publisher, eq(publisher.id, checks.publishedBy))
		.leftJoin(issuer, eq(issuer.id, sheets.issuedBy))
		.where(and(eq(checks.siteId, siteId), inArray(checks.id, [...checkIds])))
		.orderBy(asc(checks.number));
	const carried = await db
		.select({
			checkId: checkFits.checkId,
			fit: fits,
			setup: setups.name,
			control: controlSets.fileSha256,
			madeBy: maker.name,
			adoptedBy: adopter.name,
			checkedBy: checker.name,
		})
		.from(checkFits)
		.innerJoin(fits, eq(fits.id, checkFits.fitId))
		.innerJoin(setups, eq(setups.id, checkFits.setupId))
		.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
		.innerJoin(maker, eq(maker.id, fits.madeBy))
		.leftJoin(adopter, eq(adopter.id, fits.adoptedBy))
		.leftJoin(checker, eq(checker.id, fits.checkedBy))
		.where(inArray(checkFits.checkId, [...checkIds]))
		.orderBy(asc(setups.name));
	const preparedBy = [
		...carried.flatMap(({ fit }) => [
			...(fit.adoptedBy === null ? [] : [{ userId: fit.adoptedBy, what: `adopted fit ${fit.number}` }]),
			...(fit.checkedBy === null ? [] : [{ userId: fit.checkedBy, what: `checked fit ${fit.number}` }]),
		]),
		...rows.flatMap(({ sheet }) =>
			sheet.issuedBy === null ? [] : [{ userId: sheet.issuedBy, what: `issued revision ${sheet.revision} of the tolerance sheet` }],
		),
	];
	return {
		preparedBy,
		checks: rows.map(({ check, survey, revision, modelName, sheet, publishedBy, issuedBy }) => ({
			checkId: check.id,
			revisionId: check.revisionId,
			sheetId: check.sheetId,
			recorded: {
				number: check.number,
				stage: check.stage,
				engineVersion: check.engineVersion,
				inputsSha256: check.inputsSha256,
				publishedBy,
				publishedAt: check.publishedAt?.toISOString() ?? null,
				survey: {
					number: survey.number,
					name: survey.name,
					surveyedOn: survey.surveyedOn,
					observer: survey.observer,
					fileSha256: survey.fileSha256,
				},
				model: { name: modelName, revision: revision.number, fileSha256: revision.fileSha256 },
				sheet: {
					name: sheet.name,
					revision: sheet.revision,
					decision: sheet.sheet.decision,
					contentSha256: sheet.contentSha256,
					issuedBy,
					issueReason: sheet.issueReason,
				},
				fits: carried
					.filter(({ checkId }) => checkId === check.id)
					.map(({ fit, setup, control, madeBy, adoptedBy, checkedBy }) => ({
						number: fit.number,
						setup,
						kind: fit.kind,
						state: fit.state,
						preparedBy: madeBy,
						adoptedBy: adoptedBy ?? '',
						adoptedReason: fit.adoptedReason ?? '',
						checkedBy,
						surveyorInCharge: fit.surveyorInCharge,
						inputsSha256: fit.inputsSha256,
						controlFileSha256: control,
					})),
				findings: (check.findings ?? []).map(({ code, message }) => ({ code, message })),
			},
		})),
	};
}

/** What became since of the checks and fits that a signed pour names. */
export async function endedInputs(db: Handle, siteId: string, signed: ShownPour): Promise<EndedInputs> {
	const checkNumbers = signed.checks.map(({ number }) => number);
	const fitNumbers = signed.checks.flatMap((check) => check.fits.map(({ number }) => number));
	const withdrawn =
		checkNumbers.length === 0
			? []
			: await db
					.select({ number: checks.number })
					.from(checks)
					.where(and(eq(checks.siteId, siteId), inArray(checks.number, checkNumbers), eq(checks.state, 'withdrawn')))
					.orderBy(asc(checks.number));
	const superseded =
		fitNumbers.length === 0
			? []
			: await db
					.select({ number: fits.number })
					.from(fits)
					.where(and(eq(fits.siteId, siteId), inArray(fits.number, fitNumbers), eq(fits.state, 'superseded')))
					.orderBy(asc(fits.number));
	return { withdrawnChecks: withdrawn.map(({ number }) => number), supersededFits: superseded.map(({ number }) => number) };
}
