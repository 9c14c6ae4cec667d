import { and, desc, eq, inArray, type SQL, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { CheckSummary } from '#shared/check/check-schema.ts';
import type { CheckHead } from '#shared/check/contract.ts';
import { summarise } from '#shared/check/run-check.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { checkFits, checks, deviations } from '../../db/schema/check.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { checkpoints, elements, models, revisions } from '../../db/schema/model.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import { sites } from '../../db/schema/site.ts';
import { setups, surveys } from '../../db/schema/survey.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';
import { narrowedTo } from './policy.ts';

const adopter = alias(users, 'adopter');
const checker = alias(users, 'checker');

function checkRows(db: Handle, where: SQL | undefined) {
	return db
		.select({
			check: checks,
			revision: {
				revisionId: revisions.id,
				modelName: models.name,
				number: revisions.number,
				isNewest: sql<boolean>`not exists (select 1 from revisions as newer where newer.model_id = ${revisions.modelId} and newer.state = 'ready' and newer.number > ${revisions.number})`,
			},
			survey: {
				surveyId: surveys.id,
				number: surveys.number,
				name: surveys.name,
				surveyedOn: surveys.surveyedOn,
				setupCount: sql<number>`(select count(*)::int from ${setups} where ${setups.surveyId} = ${surveys.id})`,
			},
			sheet: sheets,
			isSecondPersonAsked: sites.isFitCheckedBySecond,
			madeBy: users.name,
		})
		.from(checks)
		.innerJoin(revisions, eq(revisions.id, checks.revisionId))
		.innerJoin(models, eq(models.id, revisions.modelId))
		.innerJoin(surveys, eq(surveys.id, checks.surveyId))
		.innerJoin(sheets, eq(sheets.id, checks.sheetId))
		.innerJoin(sites, eq(sites.id, checks.siteId))
		.innerJoin(users, eq(users.id, checks.madeBy))
		.where(where)
		.orderBy(desc(checks.number));
}
export type CheckRow = Awaited<ReturnType<typeof checkRows>>[number];

/** The site's checks, newest first, counted as far as the member sees. */
export async function checksOf(db: Handle, member: Member): Promise<CheckHead[]> {
	return headsOf(db, member, await checkRows(db, seenBy(member)));
}

/** One check of the site with its row; NOT_FOUND for another site's, and for a contractor while it is not published. */
export async function checkHeadOf(db: Handle, member: Member, checkId: string): Promise<{ head: CheckHead; row: CheckRow }> {
	const row = foundOne(await checkRows(db, and(seenBy(member), eq(checks.id, checkId))));
	return { head: foundOne(await headsOf(db, member, [row])), row };
}

/** The site's checks; for who is only a contractor those that are published. */
function seenBy(member: Member): SQL | undefined {
	return and(eq(checks.siteId, member.siteId), narrowedTo(member) === null ? undefined : eq(checks.state, 'published'));
}

async function headsOf(db: Handle, member: Member, rows: readonly CheckRow[]): Promise<CheckHead[]> {
	const checkIds = rows.map(({ check }) => check.id);
	if (checkIds.length === 0) return [];
	const carriedBy = await fitsOfChecks(db, checkIds);
	const companyIds = narrowedTo(member);
	const narrowed = companyIds === null ? null : await summariesOfCompanies(db, checkIds, companyIds);
	return rows.map(({ check, revision, survey, sheet, isSecondPersonAsked, madeBy }) => ({
		checkId: check.id,
		number: check.number,
		state: check.state,
		reason: check.state === 'withdrawn' ? check.withdrawnReason : check.reason,
		jobId: check.jobId,
		stage: check.stage,
		revision,
		survey,
		fits: carriedBy.flatMap(({ checkId, ...fit }) => (checkId === check.id ? [fit] : [])),
		isSecondPersonAsked,
		sheet: {
			sheetId: sheet.id,
			name: sheet.name,
			revision: sheet.revision,
			decision: sheet.sheet.decision,
			isNewest: sheet.state === 'issued',
		},
		summary: (narrowed === null ? check.summary : narrowed.get(check.id)) ?? summarise([]),
		madeBy,
		madeAt: check.madeAt,
		inputsSha256: check.inputsSha256,
	}));
}

async function fitsOfChecks(db: Handle, checkIds: readonly string[]): Promise<(CheckHead['fits'][number] & { checkId: string })[]> {
	const rows = await db
		.select({
			checkId: checkFits.checkId,
			fitId: fits.id,
			setupId: setups.id,
			setupName: setups.name,
			number: fits.number,
			adoptedBy: adopter.name,
			checkedBy: checker.name,
			isNewest: sql<boolean>`${fits.state} = 'adopted' and not exists (select 1 from control_sets as newer where newer.site_id = ${controlSets.siteId} and newer.number > ${controlSets.number})`,
		})
		.from(checkFits)
		.innerJoin(fits, eq(fits.id, checkFits.fitId))
		.innerJoin(setups, eq(setups.id, checkFits.setupId))
		.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
		.innerJoin(adopter, eq(adopter.id, fits.adoptedBy))
		.leftJoin(checker, eq(checker.id, fits.checkedBy))
		.where(inArray(checkFits.checkId, [...checkIds]))
		.orderBy(setups.name);
	return rows;
}

/** Counts over the elements of these companies' pours alone, each checkpoint once. */
async function summariesOfCompanies(
	db: Handle,
	checkIds: readonly string[],
	companyIds: readonly string[],
): Promise<Map<string, CheckSummary>> {
	const summaries = new Map(checkIds.map((checkId) => [checkId, summarise([])]));
	if (companyIds.length === 0) return summaries;
	const counts = await db
		.select({
			checkId: deviations.checkId,
			verdict: deviations.verdict,
			count: sql<number>`count(distinct ${deviations.position})::int`,
		})
		.from(deviations)
		.innerJoin(checkpoints, and(eq(checkpoints.revisionId, deviations.revisionId), eq(checkpoints.id, deviations.checkpointId)))
		.innerJoin(elements, eq(elements.id, checkpoints.elementId))
		.innerJoin(revisions, eq(revisions.id, elements.revisionId))
		.innerJoin(pourElements, and(eq(pourElements.modelId, revisions.modelId), eq(pourElements.globalId, elements.globalId)))
		.innerJoin(pours, eq(pours.id, pourElements.pourId))
		.where(and(inArray(deviations.checkId, [...checkIds]), ownElement(companyIds)))
		.groupBy(deviations.checkId, deviations.verdict);
	for (const { checkId, verdict, count } of counts) {
		const summary = summaries.get(checkId);
		if (summary !== undefined) summary[verdict] = count;
	}
	return summaries;
}

/** An element of a pour of one of the companies, or in another's pour but theirs to make (bolts: steel). */
export function ownElement(companyIds: readonly string[]): SQL {
	const own = [...companyIds];
	return sql`(${inArray(pours.companyId, own)} or ${inArray(pourElements.companyId, own)})`;
}
