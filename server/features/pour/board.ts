import { and, eq, inArray, isNull } from 'drizzle-orm';
import { boardRowOf } from '#shared/pour/board-row.ts';
import type { PourBoardRow } from '#shared/pour/contract.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { users } from '../../db/schema/account.ts';
import { flags } from '../../db/schema/flag.ts';
import { holdPointConditions, holdPoints, pourHolds, pourHoldsSeen, pours } from '../../db/schema/pour.ts';
import { peopleWith } from '../../platform/membership.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { loadShown } from './load-shown.ts';
import { poursOf } from './queries.ts';

/** Every pour the member may see as it stands on the board, by the hour of its concrete. Reads all figures of all of them. */
export async function poursBoard({ db, now }: Platform, member: Member): Promise<PourBoardRow[]> {
	const { siteId } = member;
	const summaries = await poursOf(db, member);
	if (summaries.length === 0) return [];
	const releaserIds = await peopleWith(db, { siteId, roles: ['owners-representative'], now: now() });
	const releasers = await namesOf(db, releaserIds);
	const rows: PourBoardRow[] = [];
	for (const summary of summaries) {
		const point: HoldPointKind = summary.state === 'cast' || summary.state === 'cast-in-part' ? 'after-pour' : 'before-pour';
		const { shown, readiness } = await loadShown(db, siteId, summary.pourId, point);
		const [own] = await db
			.select()
			.from(holdPoints)
			.where(and(eq(holdPoints.pourId, summary.pourId), eq(holdPoints.kind, point)));
		if (own === undefined) throw new Error('A pour has no hold point.');
		const [signedBy] = own.signedBy === null ? [] : await namesOf(db, [own.signedBy]);
		const conditions = await db
			.select({ text: holdPointConditions.text, owner: holdPointConditions.owner, dueAt: holdPointConditions.dueAt })
			.from(holdPointConditions)
			.where(and(eq(holdPointConditions.holdPointId, own.id), eq(holdPointConditions.isMet, false)));
		const hold = await standingHold(db, summary.pourId, member.userId);
		const row = boardRowOf({
			state: summary.state,
			point,
			pointState: own.state,
			company: summary.companyName,
			readiness,
			shown,
			holdReasons: hold?.reasons ?? null,
			answerBy: await firstDeadline(
				db,
				shown.flags.flatMap(({ flagId, state }) => (state === 'open' ? [flagId] : [])),
			),
			releasers: [...releasers].sort(),
			submittedAt: own.submittedAt,
			calledBy: shown.pour.calledBy,
			signedBy: signedBy ?? null,
			signedAt: own.signedAt,
			openConditions: conditions.length,
		});
		const [concrete] = await db.select({ to: pours.concretingTo }).from(pours).where(eq(pours.id, summary.pourId));
		rows.push({ ...summary, ...row, castAt: concrete?.to ?? null, hold, conditions, signedBy: signedBy ?? null, signedAt: own.signedAt });
	}
	return rows;
}

type Db = Platform['db'];

async function standingHold(db: Db, pourId: string, userId: string): Promise<PourBoardRow['hold']> {
	const [hold] = await db
		.select({ id: pourHolds.id, reasons: pourHolds.reasons, raisedAt: pourHolds.raisedAt })
		.from(pourHolds)
		.where(and(eq(pourHolds.pourId, pourId), isNull(pourHolds.endedAt)));
	if (hold === undefined) return null;
	const [seen] = await db
		.select({ at: pourHoldsSeen.seenAt })
		.from(pourHoldsSeen)
		.where(and(eq(pourHoldsSeen.holdId, hold.id), eq(pourHoldsSeen.userId, userId)));
	return { reasons: hold.reasons, raisedAt: hold.raisedAt, seenByYouAt: seen?.at ?? null };
}

async function firstDeadline(db: Db, flagIds: readonly string[]): Promise<Date | null> {
	if (flagIds.length === 0) return null;
	const rows = await db
		.select({ answerBy: flags.answerBy })
		.from(flags)
		.where(and(inArray(flags.id, [...flagIds]), eq(flags.isWith, 'contractor')));
	const deadlines = rows.flatMap(({ answerBy }) => answerBy?.getTime() ?? []);
	return deadlines.length === 0 ? null : new Date(deadlines.reduce((a, b) => Math.min(a, b)));
}

async function namesOf(db: Db, userIds: readonly string[]): Promise<string[]> {
	if (userIds.length === 0) return [];
	const rows = await db
		.select({ name: users.name })
		.from(users)
		.where(inArray(users.id, [...userIds]));
	return rows.map(({ name }) => name);
}
