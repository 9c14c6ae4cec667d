import { and, asc, count, eq, gt, inArray } from 'drizzle-orm';
import { takeBackMs } from '#shared/mail/notice.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { flagActs, flagAnswers, flagDecisions, flags } from '../../db/schema/flag.ts';
import { notices } from '../../db/schema/mail.ts';
import { sealedRecords } from '../../db/schema/record.ts';
import { auditEach } from '../../platform/audit.ts';
import { takeBackNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, NotFound, Refused } from '../../platform/refuse.ts';
import { columnsOf, type FlagRow } from './flag-rows.ts';

type ActRow = typeof flagActs.$inferSelect;

/** What can be taken back: what was said. That something is put right, or granted, has been acted on by then. */
const canBeTakenBack: readonly string[] = ['answer', 'decide'];

/**
 * Takes one's own answer or decision back, on all flags of the act, which stand as before it. NOT_FOUND for another's; REFUSED after three minutes,
 * once someone was told, or once something was signed on it; CONFLICT where a flag was acted on since. The audit keeps both.
 */
export async function takeBackAct(platform: Platform, member: Member, actId: string): Promise<{ changed: number }> {
	const { siteId, userId } = member;
	return platform.transaction(async (tx) => {
		const now = platform.now();
		const acts = await tx
			.select()
			.from(flagActs)
			.where(and(eq(flagActs.siteId, siteId), eq(flagActs.actId, actId), eq(flagActs.actorId, userId)));
		const [first] = acts;
		if (first === undefined || !canBeTakenBack.includes(first.kind)) throw new NotFound();
		const actOf = new Map(acts.map((one) => [one.flagId, one]));
		const rows = await tx
			.select()
			.from(flags)
			.where(and(eq(flags.siteId, siteId), inArray(flags.id, [...actOf.keys()])))
			.orderBy(asc(flags.id))
			.for('update');
		for (const row of rows)
			if (row.version !== actOf.get(row.id)?.versionAfter || actOf.get(row.id)?.takenBackAt !== null)
				throw new Conflict(`Flag ${row.number}, ${row.mark}, was acted on since, so nothing was taken back.`);
		if (!(await isInTime(tx, member, first, now)) || (await isSignedOn(tx, siteId, rows, first.actedAt)))
			throw new Refused('too-late', 'It is too late to take this back: others have been told. Say so on the flag instead.', 'actId');
		for (const row of rows) await restore(tx, row, actOf.get(row.id)!, now);
		await forgetSaid(tx, first, [...actOf.keys()]);
		await tx.update(flagActs).set({ takenBackAt: now }).where(eq(flagActs.actId, actId));
		await auditEach(
			tx,
			member,
			rows.map((row) => ({
				kind: 'flag-act-taken-back' as const,
				subjectId: row.id,
				data: { number: row.number, mark: row.mark, what: first.kind, before: row.state, after: actOf.get(row.id)!.before.state },
			})),
			now,
		);
		return { changed: rows.length };
	});
}

/** The member's own act on this flag that can still be taken back, as far as the clock and the version say. */
export async function takeBackOf(db: Handle, { userId }: Member, row: FlagRow, now: Date): Promise<{ actId: string; until: Date } | null> {
	const [act] = await db
		.select()
		.from(flagActs)
		.where(
			and(
				eq(flagActs.flagId, row.id),
				eq(flagActs.actorId, userId),
				eq(flagActs.versionAfter, row.version),
				inArray(flagActs.kind, [...canBeTakenBack]),
				gt(flagActs.actedAt, new Date(now.getTime() - takeBackMs)),
			),
		);
	if (act === undefined || act.takenBackAt !== null) return null;
	return { actId: act.actId, until: new Date(act.actedAt.getTime() + takeBackMs) };
}

async function isInTime(tx: Transaction, { siteId, userId }: Member, act: ActRow, now: Date): Promise<boolean> {
	if (now.getTime() - act.actedAt.getTime() >= takeBackMs) return false;
	const [told] = await tx.select({ count: count() }).from(notices).where(eq(notices.actId, act.actId));
	// Where it concerned nobody else there is nothing to stop.
	if (told === undefined || told.count === 0) return true;
	return takeBackNotices(tx, { siteId, actId: act.actId, actorId: userId, now });
}

/** A record that was signed after a flag was closed may rest on it. */
async function isSignedOn(tx: Transaction, siteId: string, rows: readonly FlagRow[], actedAt: Date): Promise<boolean> {
	if (rows.every(({ state }) => state !== 'closed')) return false;
	const signed = await tx
		.select({ id: sealedRecords.id })
		.from(sealedRecords)
		.where(and(eq(sealedRecords.siteId, siteId), gt(sealedRecords.signedAt, actedAt)))
		.limit(1);
	return signed.length > 0;
}

async function restore(tx: Transaction, row: FlagRow, { before }: ActRow, now: Date): Promise<void> {
	const { companyId: _, ...columns } = columnsOf(before);
	const restored = await tx
		.update(flags)
		.set({ ...columns, version: row.version + 1, changedAt: now })
		.where(and(eq(flags.id, row.id), eq(flags.version, row.version)))
		.returning({ id: flags.id });
	if (restored.length === 0) throw new Conflict();
}

/** What was taken back was not said; that it was once, and for how long, is in the audit. */
async function forgetSaid(tx: Transaction, { kind, actorId, actedAt }: ActRow, flagIds: readonly string[]): Promise<void> {
	if (kind === 'answer')
		await tx
			.delete(flagAnswers)
			.where(and(inArray(flagAnswers.flagId, [...flagIds]), eq(flagAnswers.answeredBy, actorId), eq(flagAnswers.answeredAt, actedAt)));
	else
		await tx
			.delete(flagDecisions)
			.where(and(inArray(flagDecisions.flagId, [...flagIds]), eq(flagDecisions.decidedBy, actorId), eq(flagDecisions.decidedAt, actedAt)));
}
