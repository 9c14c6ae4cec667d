import { and, asc, eq, inArray, isNull, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { HoldPointDetail, PourDetail, PourSummary } from '#shared/pour/contract.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { holdPointConditions, holdPoints, pourElements, pourHolds, pourHoldsSeen, pours, witnessPoints } from '../../db/schema/pour.ts';
import { companies } from '../../db/schema/site.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';
import { maySeePour } from './policy.ts';

const before = alias(holdPoints, 'before_point');
const after = alias(holdPoints, 'after_point');

const isCast = sql`${pours.state} in ('cast', 'cast-in-part')`;

const columns = {
	pourId: pours.id,
	number: pours.number,
	name: pours.name,
	companyId: pours.companyId,
	companyName: companies.name,
	plannedAt: pours.plannedAt,
	elementCount: sql<number>`(select count(*)::int from ${pourElements} where ${pourElements.pourId} = ${pours.id})`,
	state: pours.state,
	before: before.state,
	after: after.state,
	isHeld: sql<boolean>`exists (select 1 from ${pourHolds} where ${pourHolds.pourId} = ${pours.id} and ${pourHolds.endedAt} is null)`,
};

/** The pours this member may see: what is to be poured first, by planned hour, those without one last; then what is cast, the newest first. */
export async function poursOf(db: Handle, member: Member): Promise<PourSummary[]> {
	const rows = await summaries(db)
		.where(eq(pours.siteId, member.siteId))
		.orderBy(
			sql`${isCast}`,
			sql`case when ${isCast} then null else ${pours.plannedAt} end asc nulls last`,
			sql`${pours.plannedAt} desc nulls last`,
			asc(pours.number),
		);
	const others = await db
		.selectDistinct({ pourId: pourElements.pourId, companyId: pourElements.companyId })
		.from(pourElements)
		.where(and(eq(pourElements.siteId, member.siteId), sql`${pourElements.companyId} is not null`));
	return rows.filter((pour) =>
		maySeePour(
			member,
			pour,
			others.flatMap(({ pourId, companyId }) => (pourId === pour.pourId && companyId !== null ? [companyId] : [])),
		),
	);
}

export async function pourOf(db: Handle, member: Member, pourId: string): Promise<PourSummary> {
	return foundOne((await poursOf(db, member)).filter((pour) => pour.pourId === pourId));
}

function summaries(db: Handle) {
	return db
		.select(columns)
		.from(pours)
		.innerJoin(companies, eq(companies.id, pours.companyId))
		.innerJoin(before, and(eq(before.pourId, pours.id), eq(before.kind, 'before-pour')))
		.innerJoin(after, and(eq(after.pourId, pours.id), eq(after.kind, 'after-pour')))
		.$dynamic();
}

/** A pour whole; NOT_FOUND where it is not there or not the member's to see. */
export async function pourDetailOf(db: Handle, member: Member, pourId: string): Promise<PourDetail> {
	const summary = await pourOf(db, member, pourId);
	const pour = foundOne(await db.select().from(pours).where(eq(pours.id, pourId)));
	const [origin] =
		pour.partOf === null ? [] : await db.select({ pourId: pours.id, number: pours.number }).from(pours).where(eq(pours.id, pour.partOf));
	const points = await db.select().from(holdPoints).where(eq(holdPoints.pourId, pourId));
	const names = await namesOf(
		db,
		points.flatMap(({ calledBy, submittedBy, signedBy }) => [calledBy, submittedBy, signedBy]),
	);
	const conditions = await conditionsOf(
		db,
		points.map(({ id }) => id),
	);
	const pointOf = (kind: HoldPointKind): HoldPointDetail => {
		const point = foundOne(points.filter((one) => one.kind === kind));
		const nameOf = (userId: string | null) => (userId === null ? null : (names.get(userId) ?? null));
		const { state, list, readyFrom, calledAt, submittedAt, statement, signedAt, recordId } = point;
		return {
			kind,
			state,
			list,
			readyFrom,
			calledBy: nameOf(point.calledBy),
			calledAt,
			submittedBy: nameOf(point.submittedBy),
			submittedAt,
			statement,
			signedBy: nameOf(point.signedBy),
			signedAt,
			recordId,
			conditions: conditions.flatMap(({ holdPointId, ...condition }) => (holdPointId === point.id ? [condition] : [])),
		};
	};
	return {
		...summary,
		concretingFrom: pour.concretingFrom,
		concretingTo: pour.concretingTo,
		partOf: origin ?? null,
		points: { 'before-pour': pointOf('before-pour'), 'after-pour': pointOf('after-pour') },
		hold: await holdOf(db, member, pourId),
		witnessPoints: await witnessPointsOf(db, pourId),
	};
}

async function holdOf(db: Handle, member: Member, pourId: string): Promise<PourDetail['hold']> {
	const [hold] = await db
		.select()
		.from(pourHolds)
		.where(and(eq(pourHolds.pourId, pourId), isNull(pourHolds.endedAt)));
	if (hold === undefined) return null;
	const seen = await db
		.select({ userId: users.id, name: users.name, at: pourHoldsSeen.seenAt })
		.from(pourHoldsSeen)
		.innerJoin(users, eq(users.id, pourHoldsSeen.userId))
		.where(eq(pourHoldsSeen.holdId, hold.id))
		.orderBy(asc(pourHoldsSeen.seenAt));
	return {
		reasons: hold.reasons,
		raisedAt: hold.raisedAt,
		seen: seen.map(({ name, at }) => ({ name, at })),
		isSeenByYou: seen.some(({ userId }) => userId === member.userId),
	};
}

async function conditionsOf(db: Handle, holdPointIds: readonly string[]) {
	if (holdPointIds.length === 0) return [];
	return db
		.select({
			holdPointId: holdPointConditions.holdPointId,
			conditionId: holdPointConditions.id,
			text: holdPointConditions.text,
			owner: holdPointConditions.owner,
			proof: holdPointConditions.proof,
			dueAt: holdPointConditions.dueAt,
			isMet: holdPointConditions.isMet,
			metBy: users.name,
			metAt: holdPointConditions.metAt,
			metWords: holdPointConditions.metWords,
		})
		.from(holdPointConditions)
		.leftJoin(users, eq(users.id, holdPointConditions.metBy))
		.where(inArray(holdPointConditions.holdPointId, [...holdPointIds]))
		.orderBy(asc(holdPointConditions.dueAt), asc(holdPointConditions.id));
}

async function witnessPointsOf(db: Handle, pourId: string): Promise<PourDetail['witnessPoints']> {
	const rows = await db.select().from(witnessPoints).where(eq(witnessPoints.pourId, pourId)).orderBy(asc(witnessPoints.at));
	const names = await namesOf(
		db,
		rows.flatMap(({ noticeBy, saidBy }) => [noticeBy, saidBy]),
	);
	return rows.map(({ id, what, at, noticeBy, hasCome, note, saidBy }) => ({
		witnessId: id,
		what,
		at,
		noticeBy: names.get(noticeBy) ?? '',
		hasCome,
		note,
		saidBy: saidBy === null ? null : (names.get(saidBy) ?? null),
	}));
}

async function namesOf(db: Handle, userIds: readonly (string | null)[]): Promise<Map<string, string>> {
	const ids = [...new Set(userIds.filter((id) => id !== null))];
	if (ids.length === 0) return new Map();
	const rows = await db.select({ id: users.id, name: users.name }).from(users).where(inArray(users.id, ids));
	return new Map(rows.map(({ id, name }) => [id, name]));
}
