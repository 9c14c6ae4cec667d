import { randomUUID } from 'node:crypto';
import { and, eq, isNull } from 'drizzle-orm';
import { type NoticeKind, type NoticeRod, noticeUrgencies, takeBackMs } from '#shared/mail/notice.ts';
import { beginOfWorkAfter } from '#shared/site/working-time.ts';
import type { Transaction } from '../db/database.ts';
import { notices } from '../db/schema/mail.ts';
import { sites } from '../db/schema/site.ts';

/** One thing to tell, and to whom. */
export interface Notice {
	kind: NoticeKind;
	userIds: readonly string[];
	/** What it is about; a person is told once of a thing in one act. */
	subjectId: string;
	/** A whole sentence, with its full stop. */
	sentence: string;
	/** On this server, to the very place: "/sites/…/flags/…". */
	path: string;
	rod?: NoticeRod;
}

export interface NoticedAct {
	siteId: string;
	/** One id for all notices of the act; it is what is taken back. */
	actId: string;
	actorId: string | null;
	now: Date;
}

/** Leaves notices to be mailed, inside the transaction of the act they tell of. Who acted is not told of it. */
export async function postNotices(tx: Transaction, { siteId, actId, actorId, now }: NoticedAct, told: readonly Notice[]): Promise<void> {
	const [site] = await tx.select({ timeZone: sites.timeZone, calendar: sites.calendar }).from(sites).where(eq(sites.id, siteId));
	if (site === undefined) throw new Error('Notices were posted for a site that is not there.');
	const soonAt = new Date(now.getTime() + takeBackMs);
	const leaves = { now, soon: soonAt, digest: beginOfWorkAfter(soonAt, site.calendar, site.timeZone) };
	const rows = told.flatMap(({ userIds, kind, rod, ...notice }) =>
		[...new Set(userIds)]
			.filter((userId) => userId !== actorId)
			.map((userId) => ({
				...notice,
				kind,
				rod: rod ?? null,
				userId,
				id: randomUUID(),
				siteId,
				actId,
				actorId,
				createdAt: now,
				leavesAt: leaves[noticeUrgencies[kind]],
			})),
	);
	// PostgreSQL takes at most 65 535 parameters.
	for (let i = 0; i < rows.length; i += 2_000)
		await tx
			.insert(notices)
			.values(rows.slice(i, i + 2_000))
			.onConflictDoNothing();
}

/**
 * Drops the notices of an act before any has left. Answers false, with nothing dropped, where it is too late: three minutes have gone by, one
 * has left, it is of a kind that leaves at once, or another person acted.
 */
export async function takeBackNotices(
	tx: Transaction,
	{ siteId, actId, actorId, now }: NoticedAct & { actorId: string },
): Promise<boolean> {
	const mine = and(eq(notices.siteId, siteId), eq(notices.actId, actId), eq(notices.actorId, actorId));
	const rows = await tx
		.select({ kind: notices.kind, createdAt: notices.createdAt, endedAt: notices.endedAt })
		.from(notices)
		.where(mine)
		.for('update');
	const isLate = rows.some(
		({ kind, createdAt, endedAt }) =>
			endedAt !== null || noticeUrgencies[kind] === 'now' || now.getTime() - createdAt.getTime() >= takeBackMs,
	);
	if (rows.length === 0 || isLate) return false;
	await tx
		.update(notices)
		.set({ endedAt: now, end: 'taken-back' })
		.where(and(mine, isNull(notices.endedAt)));
	return true;
}
