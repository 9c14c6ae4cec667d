import { and, asc, desc, eq, inArray, type SQL, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { FitDetail, FitSummary } from '#shared/fit/contract.ts';
import { type FitChoices, fitChanges } from '#shared/fit/fit-changes.ts';
import type { NetworkFits } from '#shared/fit/network-schema.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { controlSets } from '../../db/schema/control.ts';
import { fitNetworks, fits } from '../../db/schema/fit.ts';
import { sites } from '../../db/schema/site.ts';
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
			isSecondAsked: sites.isFitCheckedBySecond,
			isNewest: sql<boolean>`not exists (select 1 from control_sets as newer where newer.site_id = ${controlSets.siteId} and newer.number > ${controlSets.number})`,
		})
		.from(fits)
		.innerJoin(setups, eq(setups.id, fits.setupId))
		.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
		.innerJoin(sites, eq(sites.id, fits.siteId))
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
	return summariesOf(db, await fitRows(db, and(eq(fits.siteId, siteId), ofSetup)));
}

/** One fit of the site, as it was made; NOT_FOUND for another site's. */
export async function fitOf(db: Handle, siteId: string, fitId: string): Promise<FitDetail> {
	const row = foundOne(await fitRows(db, and(eq(fits.siteId, siteId), eq(fits.id, fitId))));
	const summary = foundOne(await summariesOf(db, [row]));
	const { knownScale, shelves, relabellings, result, pairs, networkId } = row.fit;
	const [kept] = networkId === null ? [] : await db.select().from(fitNetworks).where(eq(fitNetworks.id, networkId));
	return { ...summary, knownScale, shelves, relabellings, result, pairs, network: kept?.network ?? null };
}

async function summariesOf(db: Handle, rows: readonly FitRow[]): Promise<FitSummary[]> {
	const changesOf = await changesBySetup(db, [...new Set(rows.map(({ fit }) => fit.setupId))]);
	const madeWith = await madeTogether(db, [...new Set(rows.flatMap(({ fit }) => fit.networkId ?? []))]);
	return rows.map((row) => summaryOf(row, changesOf.get(row.fit.id) ?? [], madeWith.get(row.fit.networkId ?? '') ?? null));
}

/** The fits of each of these networks, by the network's id, set-ups in their order. */
export async function madeTogether(db: Handle, networkIds: readonly string[]): Promise<Map<string, NetworkFits>> {
	const found = new Map<string, NetworkFits>();
	if (networkIds.length === 0) return found;
	const rows = await db
		.select({ networkId: fits.networkId, fitId: fits.id, number: fits.number, setupId: fits.setupId, setupName: setups.name })
		.from(fits)
		.innerJoin(setups, eq(setups.id, fits.setupId))
		.where(inArray(fits.networkId, [...networkIds]))
		.orderBy(asc(fits.number));
	for (const { networkId, ...fit } of rows) {
		if (networkId === null) continue;
		const own = found.get(networkId) ?? { networkId, fits: [] };
		own.fits.push(fit);
		found.set(networkId, own);
	}
	return found;
}

/** What is other in each fit of these set-ups than in the one before it, by the fit's id. */
async function changesBySetup(db: Handle, setupIds: readonly string[]): Promise<Map<string, string[]>> {
	const changes = new Map<string, string[]>();
	if (setupIds.length === 0) return changes;
	const rows = await db
		.select({
			id: fits.id,
			setupId: fits.setupId,
			kind: fits.kind,
			isTogether: sql<boolean>`${fits.networkId} is not null`,
			knownScale: fits.knownScale,
			controlNumber: controlSets.number,
			shelves: fits.shelves,
			relabellings: fits.relabellings,
			// The names alone: pairs and results of many fits are large.
			pairNames: sql<
				string[]
			>`coalesce((select jsonb_agg(pair->>'name') from jsonb_array_elements(${fits.pairs}->'pairs') as pair), '[]'::jsonb)`,
		})
		.from(fits)
		.innerJoin(controlSets, eq(controlSets.id, fits.controlSetId))
		.where(inArray(fits.setupId, [...setupIds]))
		.orderBy(asc(fits.number));
	const last = new Map<string, FitChoices>();
	for (const { id, setupId, ...choices } of rows) {
		const before = last.get(setupId);
		changes.set(id, before === undefined ? [] : fitChanges(before, choices));
		last.set(setupId, choices);
	}
	return changes;
}

function summaryOf({ fit, ...row }: FitRow, changes: string[], madeWith: NetworkFits | null): FitSummary {
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
		adoptedById: fit.adoptedBy,
		adoptedAt: fit.adoptedAt,
		adoptedReason: fit.adoptedReason,
		checkedAt: fit.checkedAt,
		checkedNote: fit.checkedNote,
		surveyorInCharge: fit.surveyorInCharge,
		changes,
		madeWith,
		inputsSha256: fit.inputsSha256,
	};
}
