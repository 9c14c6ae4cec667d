import { and, asc, desc, eq, ne } from 'drizzle-orm';
import type { Verdict } from '#shared/check/check-schema.ts';
import { standingOf } from '#shared/check/standing.ts';
import { actOnFlag } from '#shared/flag/act-on-flag.ts';
import type { FlagAct, FlagLife, FlagMoment } from '#shared/flag/flag-life.ts';
import type { WorstDeviation } from '#shared/flag/flag-schema.ts';
import { raiseFlag } from '#shared/flag/measured-again.ts';
import { flagKey, type KindStanding, kindStandings } from '#shared/flag/plan-flags.ts';
import type { Handle } from '../../db/database.ts';
import { readMeasurements, type StoredMeasurement } from '../../db/read-measurements.ts';
import { checks } from '../../db/schema/check.ts';
import { flags } from '../../db/schema/flag.ts';
import { elements, models, revisions } from '../../db/schema/model.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { foundOne } from '../../platform/refuse.ts';
import { type FlagRow, lifeOf } from './flag-rows.ts';

/** A flag that would be raised. */
export interface NewFlag {
	key: string;
	standing: KindStanding;
	mark: string;
	title: string;
	life: FlagLife;
}

/** A flag that would be another. */
export interface ChangedFlag {
	row: FlagRow;
	act: Extract<FlagAct, { kind: 'measured-again' | 'lapse' }>;
	after: FlagLife;
	/** What was measured, where it was. */
	worst: WorstDeviation | null;
	/** Of a lapse: which check, revision or sheet. */
	words: string | null;
}

export interface FlagChanges {
	raised: NewFlag[];
	changed: ChangedFlag[];
}

const dayMs = 86_400_000;

/** What publishing this trial would do to the site's flags. Reads only. */
export async function changesOfPublishing(db: Handle, siteId: string, checkId: string, moment: FlagMoment): Promise<FlagChanges> {
	const measurements = await readMeasurements(db, { siteId, withCheckId: checkId });
	const alive = await aliveFlags(db, siteId);
	const own = measurements.filter((one) => one.checkId === checkId && one.deviation.deviationMm !== null);
	const keyOf = (one: StoredMeasurement): string => flagKey({ ...one, kind: one.deviation.characteristic });
	const touched = new Set(own.map(keyOf));
	const judged = new Set(own.filter(({ deviation }) => deviation.limitsMm !== null).map(keyOf));
	const known = byKey(measurements, alive, checkId);
	const head = await headOf(db, siteId, checkId);
	const surveyOf = await surveysOfChecks(db, siteId);
	const changes: FlagChanges = { raised: [], changed: [] };
	for (const key of touched) {
		const flag = alive.get(key);
		const standing = known.get(key);
		if (standing === undefined) {
			if (flag !== undefined && !judged.has(key)) lapse(changes, flag, 'limits-changed', `No rule of ${head.sheet} decides it.`, moment);
			continue;
		}
		if (flag === undefined) continue;
		const isOldSurvey = standing.surveyId === surveyOf.get(flag.checkId);
		if (standing.verdict === 'within' && flag.state !== 'closed' && isOldSurvey)
			lapse(changes, flag, 'limits-changed', `By ${head.sheet} what was measured is within.`, moment);
		else measure(changes, flag, standing, moment);
	}
	if (head.isNewestRevision) {
		const there = await db.select({ globalId: elements.globalId }).from(elements).where(eq(elements.revisionId, head.revisionId));
		const globalIds = new Set(there.map(({ globalId }) => globalId));
		for (const flag of alive.values())
			if (flag.modelId === head.modelId && !globalIds.has(flag.globalId))
				lapse(changes, flag, 'element-gone', `${head.revision} has it no more.`, moment);
	}
	await raiseWhere(
		db,
		siteId,
		changes,
		(key) => (touched.has(key) && !alive.has(key) ? known.get(key) : undefined),
		known,
		measurements,
		moment,
	);
	return changes;
}

/** What withdrawing this published check would do: what it raised lapses, what else rested on it stands on the checks that are left. */
export async function changesOfWithdrawing(
	db: Handle,
	siteId: string,
	checkId: string,
	reason: string,
	moment: FlagMoment,
): Promise<FlagChanges> {
	const measurements = await readMeasurements(db, { siteId, withoutCheckId: checkId });
	const alive = await aliveFlags(db, siteId);
	const known = byKey(measurements, alive, null);
	const head = await headOf(db, siteId, checkId);
	const changes: FlagChanges = { raised: [], changed: [] };
	const freed = new Set<string>();
	for (const [key, flag] of alive) {
		if (flag.raisedCheckId === checkId) {
			lapse(changes, flag, 'check-withdrawn', `Check ${head.number} was withdrawn: ${reason}`, moment);
			freed.add(key);
		} else if (flag.checkId === checkId) {
			const standing = known.get(key);
			if (standing !== undefined) measure(changes, flag, standing, moment);
		}
	}
	await raiseWhere(db, siteId, changes, (key) => (freed.has(key) ? known.get(key) : undefined), known, measurements, moment);
	return changes;
}

/**
 * What issuing a sheet does to flags on what published checks measured: those lapse that have no point left off by its limits. `newVerdictOf`
 * says what a sheet makes of a point, null where it changes nothing; all else waits for a check by the new sheet.
 */
export async function changesOfIssuing(
	db: Handle,
	siteId: string,
	newVerdictOf: (modelId: string, checkpointId: string) => { is: Verdict; words: string } | null,
	moment: FlagMoment,
): Promise<FlagChanges> {
	const changes: FlagChanges = { raised: [], changed: [] };
	const alive = await aliveFlags(db, siteId);
	const standings = standingOf(await readMeasurements(db, { siteId, globalIds: [...alive.values()].map(({ globalId }) => globalId) }));
	for (const [key, flag] of alive) {
		if (flag.state === 'closed') continue;
		const off = standings.filter(
			({ modelId, globalId, newest: { deviation } }) =>
				flagKey({ modelId, globalId, kind: deviation.characteristic }) === key && isOff(deviation.verdict),
		);
		const now = off.map(({ modelId, checkpointId }) => newVerdictOf(modelId, checkpointId));
		const first = now[0];
		if (first && now.every((one) => one !== null && !isOff(one.is))) lapse(changes, flag, 'limits-changed', first.words, moment);
	}
	return changes;
}

const isOff = (verdict: Verdict): boolean => verdict === 'outside' || verdict === 'too-close-to-call' || verdict === 'undecided';

/** Flags that have not lapsed, by element and kind. */
async function aliveFlags(db: Handle, siteId: string): Promise<Map<string, FlagRow>> {
	const rows = await db
		.select()
		.from(flags)
		.where(and(eq(flags.siteId, siteId), ne(flags.state, 'lapsed')))
		.orderBy(asc(flags.number));
	return new Map(rows.map((row) => [flagKey(row), row]));
}

function byKey(
	measurements: readonly StoredMeasurement[],
	alive: ReadonlyMap<string, FlagRow>,
	publishingId: string | null,
): Map<string, KindStanding> {
	const workedOn = new Map([...alive.values()].map((row) => [`${row.modelId}\n${row.globalId}`, row.putRightAt?.getTime() ?? null]));
	const publishedAt = new Map(measurements.map((one) => [one.checkId, one.publishedAt]));
	const standings = standingOf(measurements, { workedOnAt: (modelId, globalId) => workedOn.get(`${modelId}\n${globalId}`) ?? null });
	const found = kindStandings(standings, {
		isBeforePutRight: (key, newest) => {
			const flag = alive.get(key);
			if (flag?.state !== 'put-right' || flag.putRightAt === null) return false;
			const published = publishedAt.get(newest.checkId) ?? null;
			const isOlderCheck = newest.checkId !== publishingId && published !== null && published <= flag.putRightAt;
			return isOlderCheck || newest.measuredAt + dayMs <= flag.putRightAt.getTime();
		},
	});
	return new Map(found.map((one) => [flagKey(one), one]));
}

function measure(changes: FlagChanges, row: FlagRow, standing: KindStanding, moment: FlagMoment): void {
	const { checkId, verdict, worstMm, isInsideAlone } = standing;
	act(changes, row, { kind: 'measured-again', finding: { checkId, verdict, worstMm, isInsideAlone } }, null, moment, standing.worst);
}

function lapse(
	changes: FlagChanges,
	row: FlagRow,
	because: Extract<FlagAct, { kind: 'lapse' }>['because'],
	words: string,
	moment: FlagMoment,
): void {
	act(changes, row, { kind: 'lapse', because }, words, moment);
}

function act(
	changes: FlagChanges,
	row: FlagRow,
	done: ChangedFlag['act'],
	words: string | null,
	moment: FlagMoment,
	worst: WorstDeviation | null = null,
): void {
	const outcome = actOnFlag(lifeOf(row), done, 'server', moment);
	if (!outcome.ok) throw new Error(`Flag ${row.number} does not take what its check says: ${outcome.refusal.message}`);
	changes.changed.push({ row, act: done, after: outcome.flag, words, worst });
}

async function raiseWhere(
	db: Handle,
	siteId: string,
	changes: FlagChanges,
	isNew: (key: string) => KindStanding | undefined,
	known: ReadonlyMap<string, KindStanding>,
	measurements: readonly StoredMeasurement[],
	moment: FlagMoment,
): Promise<void> {
	const named = new Map(measurements.map(({ modelId, globalId, mark, title }) => [`${modelId}\n${globalId}`, { mark, title }]));
	const companyOf = await companiesOf(db, siteId);
	for (const key of known.keys()) {
		const standing = isNew(key);
		if (standing === undefined) continue;
		const element = `${standing.modelId}\n${standing.globalId}`;
		const life = raiseFlag(standing, companyOf.get(element) ?? null, moment);
		if (life === null) continue;
		changes.raised.push({ key, standing, life, ...(named.get(element) ?? { mark: '', title: '' }) });
	}
}

/** Whose an element is: its own company within a pour (bolts: steel), else the pour's; of several pours the first by number. */
async function companiesOf(db: Handle, siteId: string): Promise<Map<string, string>> {
	const rows = await db
		.select({ modelId: pourElements.modelId, globalId: pourElements.globalId, own: pourElements.companyId, pour: pours.companyId })
		.from(pourElements)
		.innerJoin(pours, eq(pours.id, pourElements.pourId))
		.where(eq(pourElements.siteId, siteId))
		.orderBy(desc(pours.number));
	return new Map(rows.map(({ modelId, globalId, own, pour }) => [`${modelId}\n${globalId}`, own ?? pour]));
}

async function surveysOfChecks(db: Handle, siteId: string): Promise<Map<string, string>> {
	const rows = await db.select({ id: checks.id, surveyId: checks.surveyId }).from(checks).where(eq(checks.siteId, siteId));
	return new Map(rows.map(({ id, surveyId }) => [id, surveyId]));
}

async function headOf(db: Handle, siteId: string, checkId: string) {
	const { check, revision, modelName, sheet } = foundOne(
		await db
			.select({ check: checks, revision: revisions, modelName: models.name, sheet: sheets })
			.from(checks)
			.innerJoin(revisions, eq(revisions.id, checks.revisionId))
			.innerJoin(models, eq(models.id, revisions.modelId))
			.innerJoin(sheets, eq(sheets.id, checks.sheetId))
			.where(and(eq(checks.siteId, siteId), eq(checks.id, checkId))),
	);
	const [newest] = await db
		.select({ id: revisions.id })
		.from(revisions)
		.where(and(eq(revisions.modelId, revision.modelId), eq(revisions.state, 'ready')))
		.orderBy(desc(revisions.number))
		.limit(1);
	return {
		number: check.number,
		revisionId: revision.id,
		modelId: revision.modelId,
		isNewestRevision: newest?.id === revision.id,
		revision: `Revision ${revision.number} of ${modelName}`,
		sheet: `revision ${sheet.revision} of the sheet ${sheet.name}`,
	};
}
