import { and, desc, eq, type SQL, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { FitDetail, FitSummary } from '#shared/fit/contract.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fits } from '../../db/schema/fit.ts';
import { setups } from '../../db/schema/survey.ts';
import { foundOne } from '../../platform/refuse.ts';

const maker = alias(users, 'maker');
const adopter = alias(users, 'adopter');
const checker = alias(users, 'checker');

function fitRows(db: Handle, where: SQL | undefined) {
	return db
		.select({
			fit: fits,
			surveyId: setups.surveyId,
			setupName: setups.name,
			madeBy: maker.name,
			adoptedBy: adopter.name,
			checkedBy: checker.name,
			isNewest: sql<boolean>`not exists (select 1 from control_sets as newer where newer.site_id = ${controlSets.siteId} and newer.number > ${controlSets.number})`,
		})
		.from(fits)
		.innerJoin(setups, eq(setups.id, fits.setupId))
		.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
		.innerJoin(maker, eq(maker.id, fits.madeBy))
		.leftJoin(adopter, eq(adopter.id, fits.adoptedBy))
		.leftJoin(checker, eq(checker.id, fits.checkedBy))
		.where(where)
		.orderBy(desc(fits.number));
}
type FitRow = Awaited<ReturnType<typeof fitRows>>[number];

/** The site's fits, newest first; of one set-up where it is named. */
export async function fitsOf(db: Handle, siteId: string, setupId?: string): Promise<FitSummary[]> {
	const ofSetup = setupId === undefined ? undefined : eq(fits.setupId, setupId);
	return (await fitRows(db, and(eq(fits.siteId, siteId), ofSetup))).map(summaryOf);
}

/** One fit of the site, as it was made; NOT_FOUND for another site's. */
export async function fitOf(db: Handle, siteId: string, fitId: string): Promise<FitDetail> {
	const row = foundOne(await fitRows(db, and(eq(fits.siteId, siteId), eq(fits.id, fitId))));
	const { knownScale, shelves, result, pairs } = row.fit;
	return { ...summaryOf(row), knownScale, shelves, result, pairs };
}

function summaryOf({ fit, ...row }: FitRow): FitSummary {
	return {
		...row,
		fitId: fit.id,
		number: fit.number,
		setupId: fit.setupId,
		controlSetId: fit.controlSetId,
		kind: fit.kind,
		state: fit.state,
		rmsM: fit.result.rms,
		pairCount: fit.result.pairs.filter(({ heldBack }) => !heldBack).length,
		madeAt: fit.madeAt,
		adoptedAt: fit.adoptedAt,
		adoptedReason: fit.adoptedReason,
		inputsSha256: fit.inputsSha256,
	};
}
