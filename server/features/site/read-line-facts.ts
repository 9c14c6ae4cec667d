import { and, asc, count, desc, eq, inArray, isNull, max, ne } from 'drizzle-orm';
import { maySeeFlag } from '#shared/flag/may-act.ts';
import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { Handle } from '../../db/database.ts';
import { checkFits, checks } from '../../db/schema/check.ts';
import { controlPoints, controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { flags } from '../../db/schema/flag.ts';
import { models, revisions } from '../../db/schema/model.ts';
import { pours } from '../../db/schema/pour.ts';
import { sealedRecords } from '../../db/schema/record.ts';
import { setups, surveys } from '../../db/schema/survey.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import type { Member } from '../../platform/platform.ts';
import type { LineFacts } from './line.ts';

/** Reads what the line is told from, as this member may see it. */
export async function readLineFacts(db: Handle, member: Member): Promise<LineFacts> {
	const { siteId } = member;
	const newestControlSetId = await newestControlSet(db, siteId);
	return {
		models: await newestRevisions(db, siteId),
		markCount: newestControlSetId === null ? null : await markCount(db, newestControlSetId),
		...(await surveyFacts(db, siteId)),
		newestCheck: await newestCheck(db, member, newestControlSetId),
		flags: await flagsSeen(db, member),
		recordCount: await recordCount(db, siteId),
		pours: await poursSeen(db, member),
	};
}

async function newestRevisions(db: Handle, siteId: string): Promise<LineFacts['models']> {
	return db
		.selectDistinctOn([models.name, revisions.modelId], { state: revisions.state, number: revisions.number })
		.from(revisions)
		.innerJoin(models, eq(models.id, revisions.modelId))
		.where(eq(revisions.siteId, siteId))
		.orderBy(asc(models.name), revisions.modelId, desc(revisions.number));
}

async function newestControlSet(db: Handle, siteId: string): Promise<string | null> {
	const [newest] = await db
		.select({ id: controlSets.id })
		.from(controlSets)
		.where(eq(controlSets.siteId, siteId))
		.orderBy(desc(controlSets.number))
		.limit(1);
	return newest?.id ?? null;
}

async function markCount(db: Handle, controlSetId: string): Promise<number> {
	const [row] = await db.select({ marks: count() }).from(controlPoints).where(eq(controlPoints.controlSetId, controlSetId));
	return row?.marks ?? 0;
}

async function surveyFacts(db: Handle, siteId: string): Promise<Pick<LineFacts, 'surveyCount' | 'isNewestSurveyFitted'>> {
	const rows = await db
		.select({ id: surveys.id, state: surveys.state })
		.from(surveys)
		.where(eq(surveys.siteId, siteId))
		.orderBy(desc(surveys.number));
	const [newest] = rows;
	if (newest === undefined || newest.state !== 'ready') return { surveyCount: rows.length, isNewestSurveyFitted: false };
	const unfitted = await db
		.select({ id: setups.id })
		.from(setups)
		.leftJoin(fits, and(eq(fits.setupId, setups.id), eq(fits.state, 'adopted')))
		.where(and(eq(setups.surveyId, newest.id), isNull(fits.id)));
	return { surveyCount: rows.length, isNewestSurveyFitted: unfitted.length === 0 };
}

async function newestCheck(db: Handle, { siteId, roles }: Member, newestControlSetId: string | null): Promise<LineFacts['newestCheck']> {
	const [row] = await db
		.select({ check: checks, modelId: revisions.modelId, revisionNumber: revisions.number, sheetState: sheets.state })
		.from(checks)
		.innerJoin(revisions, eq(revisions.id, checks.revisionId))
		.innerJoin(sheets, eq(sheets.id, checks.sheetId))
		.where(
			and(eq(checks.siteId, siteId), inArray(checks.state, seesEveryPour(roles) ? ['computing', 'trial', 'published'] : ['published'])),
		)
		.orderBy(desc(checks.number))
		.limit(1);
	if (row === undefined) return null;
	const { check } = row;
	if (check.state === 'withdrawn' || check.state === 'failed') return null;
	const used = await db
		.select({ state: fits.state, controlSetId: fits.controlSetId })
		.from(checkFits)
		.innerJoin(fits, eq(fits.id, checkFits.fitId))
		.where(eq(checkFits.checkId, check.id));
	const restsOnNewest =
		row.revisionNumber === (await newestReadyNumber(db, row.modelId)) &&
		row.sheetState === 'issued' &&
		used.every((fit) => fit.state === 'adopted' && fit.controlSetId === newestControlSetId);
	const summary = seesEveryPour(roles) ? check.summary : null;
	return { checkId: check.id, number: check.number, state: check.state, summary, restsOnNewest };
}

/** A revision that is still being read, or could not be, makes nothing stale. */
async function newestReadyNumber(db: Handle, modelId: string): Promise<number | null> {
	const [row] = await db
		.select({ number: max(revisions.number) })
		.from(revisions)
		.where(and(eq(revisions.modelId, modelId), eq(revisions.state, 'ready')));
	return row?.number ?? null;
}

async function recordCount(db: Handle, siteId: string): Promise<number> {
	const [row] = await db.select({ records: count() }).from(sealedRecords).where(eq(sealedRecords.siteId, siteId));
	return row?.records ?? 0;
}

async function flagsSeen(db: Handle, member: Member): Promise<LineFacts['flags']> {
	const rows = await db
		.select({ state: flags.state, companyId: flags.companyId })
		.from(flags)
		.where(and(eq(flags.siteId, member.siteId), ne(flags.state, 'lapsed')));
	const seen = rows.filter((row) => maySeeFlag(member, row));
	return { open: seen.filter(({ state }) => state !== 'closed').length, closed: seen.filter(({ state }) => state === 'closed').length };
}

async function poursSeen(db: Handle, member: Member): Promise<LineFacts['pours']> {
	const rows = await db
		.select({ state: pours.state, plannedAt: pours.plannedAt, companyId: pours.companyId })
		.from(pours)
		.where(eq(pours.siteId, member.siteId));
	return rows.filter(({ companyId }) => seesEveryPour(member.roles) || member.companyIds.includes(companyId));
}
