import { and, asc, desc, eq, inArray, type SQL } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import { disagreementFindings, standingOf } from '#shared/check/standing.ts';
import type { FlagDetail, FlagEvent, FlagPoint, FlagSummary } from '#shared/flag/contract.ts';
import { maySeeFlag } from '#shared/flag/may-act.ts';
import { answerWords, decisionWords } from '#shared/flag/said-words.ts';
import type { Handle } from '../../db/database.ts';
import { readMeasurements } from '../../db/read-measurements.ts';
import { users } from '../../db/schema/account.ts';
import { flagAnswers, flagComments, flagDecisions, flags } from '../../db/schema/flag.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import { companies, memberships } from '../../db/schema/site.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { NotFound } from '../../platform/refuse.ts';
import { siteSettingsOf } from '../../platform/site-settings.ts';
import { broughtTo, ownSurveysOf } from './brought-points.ts';
import { flagPlanOf } from './flag-plan.ts';
import { answerOf, decisionOf, type FlagRow } from './flag-rows.ts';
import { photosOf } from './photos.ts';
import { takeBackOf } from './take-back.ts';

const consenters = alias(users, 'consenters');

async function rowsOf(db: Handle, member: Member, where?: SQL): Promise<{ row: FlagRow; companyName: string | null }[]> {
	const rows = await db
		.select({ row: flags, companyName: companies.name })
		.from(flags)
		.leftJoin(companies, and(eq(companies.siteId, flags.siteId), eq(companies.id, flags.companyId)))
		.where(and(eq(flags.siteId, member.siteId), where))
		.orderBy(asc(flags.answerBy), desc(flags.number));
	return rows.filter(({ row }) => maySeeFlag(member, row));
}

/** The flags this member may see, by deadline, then the newest. */
export async function flagsOf(db: Handle, member: Member): Promise<FlagSummary[]> {
	const rows = await rowsOf(db, member);
	const poursByElement = await poursOfElements(db, member.siteId);
	return rows.map((one) => summaryOf(one, poursByElement));
}

/** The flag as this member sees it; NOT_FOUND for another company's. */
export async function flagRowOf(db: Handle, member: Member, flagId: string): Promise<{ row: FlagRow; companyName: string | null }> {
	const [found] = await rowsOf(db, member, eq(flags.id, flagId));
	if (found === undefined) throw new NotFound();
	return found;
}

/** A flag with what was measured of it, what was said, and its photos. */
export async function flagDetailOf(platform: Platform, member: Member, flagId: string): Promise<FlagDetail> {
	const { db } = platform;
	const found = await flagRowOf(db, member, flagId);
	const { row } = found;
	const { settings } = await siteSettingsOf(db, member.siteId);
	return {
		...summaryOf(found, await poursOfElements(db, member.siteId, row.globalId)),
		points: await pointsOf(db, member.siteId, row),
		history: await historyOf(db, row),
		photos: await photosOf(platform, row.id),
		projectEngineers: await projectEngineersOf(db, member.siteId, platform.now()),
		needsOwnersConsent: settings.needsOwnersConsent,
		plan: await flagPlanOf(db, row),
		brought: await broughtTo(db, row),
		ownSurveys: await ownSurveysOf(db, member.siteId, row.companyId),
		takeBack: await takeBackOf(db, member, row, platform.now()),
	};
}

function summaryOf(
	{ row, companyName }: { row: FlagRow; companyName: string | null },
	poursByElement: ReadonlyMap<string, FlagSummary['pours']>,
): FlagSummary {
	const { id, siteId: _, isInsideAlone: __, raisedCheckId: ___, putRightAt: ____, ...rest } = row;
	return {
		...rest,
		flagId: id,
		companyName,
		answer: answerOf(row.answer),
		decision: decisionOf(row.decision),
		pours: poursByElement.get(`${row.modelId}\n${row.globalId}`) ?? [],
	};
}

async function poursOfElements(db: Handle, siteId: string, globalId?: string): Promise<Map<string, FlagSummary['pours']>> {
	const rows = await db
		.select({ modelId: pourElements.modelId, globalId: pourElements.globalId, pourId: pours.id, number: pours.number })
		.from(pourElements)
		.innerJoin(pours, eq(pours.id, pourElements.pourId))
		.where(and(eq(pourElements.siteId, siteId), globalId === undefined ? undefined : eq(pourElements.globalId, globalId)))
		.orderBy(asc(pours.number));
	const found = new Map<string, FlagSummary['pours']>();
	for (const { modelId, globalId: element, pourId, number } of rows) {
		const key = `${modelId}\n${element}`;
		found.set(key, [...(found.get(key) ?? []), { pourId, number }]);
	}
	return found;
}

async function pointsOf(db: Handle, siteId: string, row: FlagRow): Promise<FlagPoint[]> {
	const measurements = await readMeasurements(db, { siteId, globalIds: [row.globalId] });
	const own = measurements.filter(({ modelId, deviation }) => modelId === row.modelId && deviation.characteristic === row.kind);
	return standingOf(own, { workedOnAt: () => row.putRightAt?.getTime() ?? null }).map((standing) => {
		const { newest, trend } = standing;
		return {
			deviation: newest.deviation,
			surveyNumber: newest.surveyNumber,
			surveyName: newest.surveyName,
			measuredOn: new Date(newest.measuredAt),
			stage: newest.stage,
			isFitChecked: newest.isFitChecked,
			trend: trend.map(({ surveyNumber, measuredAt, deviation, isFitAdopted }) => ({
				surveyNumber,
				measuredOn: new Date(measuredAt),
				deviationMm: deviation.deviationMm ?? 0,
				expandedUncertaintyMm: deviation.expandedUncertaintyMm,
				isFitAdopted,
			})),
			disagreement: disagreementFindings([standing], () => row.mark)[0]?.message ?? null,
		};
	});
}

async function historyOf(db: Handle, row: FlagRow): Promise<FlagEvent[]> {
	const answered = await db
		.select({ said: flagAnswers, by: users.name })
		.from(flagAnswers)
		.innerJoin(users, eq(users.id, flagAnswers.answeredBy))
		.where(eq(flagAnswers.flagId, row.id));
	const decided = await db
		.select({ said: flagDecisions, by: users.name, consentBy: consenters.name })
		.from(flagDecisions)
		.innerJoin(users, eq(users.id, flagDecisions.decidedBy))
		.leftJoin(consenters, eq(consenters.id, flagDecisions.consentBy))
		.where(eq(flagDecisions.flagId, row.id));
	const commented = await db
		.select({ said: flagComments, by: users.name })
		.from(flagComments)
		.innerJoin(users, eq(users.id, flagComments.saidBy))
		.where(eq(flagComments.flagId, row.id));
	const events: FlagEvent[] = [
		{ at: row.raisedAt, by: null, words: 'Raised', text: null },
		...answered.map(({ said, by }) => ({ at: said.answeredAt, by, ...answerWords(answerOf(said.answer) ?? said.answer) })),
		...decided.flatMap(({ said, by, consentBy }) => {
			const decision = { at: said.decidedAt, by, ...decisionWords(decisionOf(said.decision) ?? said.decision, said.isWithoutAnswer) };
			if (said.isConsentGiven === null || said.consentAt === null) return [decision];
			const words = said.isConsentGiven ? 'Consents to the concession' : 'Does not consent to the concession';
			return [decision, { at: said.consentAt, by: consentBy, words, text: said.consentReason }];
		}),
		...commented.map(({ said, by }) => ({ at: said.saidAt, by, words: 'Says', text: said.text })),
		...(row.putRightAt === null ? [] : [{ at: row.putRightAt, by: null, words: 'Put right, ready to measure', text: null }]),
		...(row.state === 'lapsed' ? [{ at: row.changedAt, by: null, words: 'Lapsed', text: row.lapsedWords }] : []),
	];
	return events.sort((a, b) => a.at.getTime() - b.at.getTime());
}

async function projectEngineersOf(db: Handle, siteId: string, now: Date): Promise<string[]> {
	const rows = await db
		.select({ name: users.name, fromAt: memberships.fromAt, leftAt: memberships.leftAt })
		.from(memberships)
		.innerJoin(users, eq(users.id, memberships.userId))
		.where(and(eq(memberships.siteId, siteId), inArray(memberships.role, ['project-engineer'])))
		.orderBy(asc(users.name));
	return rows.flatMap(({ name, fromAt, leftAt }) => (fromAt <= now && (leftAt === null || leftAt > now) ? [name] : []));
}
