import { and, eq, inArray } from 'drizzle-orm';
import type { Transaction } from '../../db/database.ts';
import type { PublishedAct } from '../../db/schema/check.ts';
import { flagComments, flagPhotos, flags } from '../../db/schema/flag.ts';
import { auditEach } from '../../platform/audit.ts';
import type { Member } from '../../platform/platform.ts';
import { Refused } from '../../platform/refuse.ts';
import { answerOf, decisionOf, type FlagRow } from './flag-rows.ts';

const tooLate = (number: number | null): Refused =>
	new Refused(
		'flag-acted-on',
		`${number === null ? 'A flag of it' : `Flag ${number}`} has been acted on since, so nothing was taken back. Withdraw the check with a reason.`,
		'checkId',
	);

/** The flags that a publishing raised are gone, those that it changed are as they were; REFUSED where one was acted on since. */
export async function takeBackFlags(tx: Transaction, member: Member, { raisedIds, changed }: PublishedAct, now: Date): Promise<void> {
	const { siteId } = member;
	const ids = [...raisedIds, ...changed.map(({ id }) => id)];
	if (ids.length === 0) return;
	const ofSite = and(eq(flags.siteId, siteId), inArray(flags.id, ids));
	const present = new Map((await tx.select().from(flags).where(ofSite).for('update')).map((row) => [row.id, row]));
	const versionAfter = new Map([
		...raisedIds.map((id) => [id, 1] as const),
		...changed.map(({ id, version }) => [id, version + 1] as const),
	]);
	for (const [id, version] of versionAfter) {
		const row = present.get(id);
		if (row?.version !== version) throw tooLate(row?.number ?? null);
	}
	if (raisedIds.length > 0) {
		const spokenOf = [
			...(await tx.select({ id: flagComments.flagId }).from(flagComments).where(inArray(flagComments.flagId, raisedIds)).limit(1)),
			...(await tx.select({ id: flagPhotos.flagId }).from(flagPhotos).where(inArray(flagPhotos.flagId, raisedIds)).limit(1)),
		];
		if (spokenOf[0]) throw tooLate(present.get(spokenOf[0].id)?.number ?? null);
		await tx.delete(flags).where(and(eq(flags.siteId, siteId), inArray(flags.id, raisedIds)));
	}
	for (const before of changed) {
		const { id, ...columns } = rowOf(before);
		await tx
			.update(flags)
			.set({ ...columns, version: before.version + 2, changedAt: now })
			.where(and(eq(flags.siteId, siteId), eq(flags.id, id)));
	}
	await auditEach(
		tx,
		member,
		[
			...raisedIds.map((id) => ({ id, before: present.get(id)!.state, after: null })),
			...changed.map((row) => ({ id: row.id, before: present.get(row.id)!.state, after: rowOf(row).state })),
		].map(({ id, before, after }) => ({
			kind: 'flag-taken-back' as const,
			subjectId: id,
			data: { number: present.get(id)!.number, before, after },
		})),
		now,
	);
}

/** A flag as it was kept in jsonb, its dates dates again. */
function rowOf(kept: PublishedAct['changed'][number]): FlagRow {
	const row = kept as unknown as FlagRow;
	const dateOf = (at: Date | null): Date | null => (at === null ? null : new Date(at));
	return {
		...row,
		raisedAt: new Date(row.raisedAt),
		changedAt: new Date(row.changedAt),
		answerBy: dateOf(row.answerBy),
		timeAsked: dateOf(row.timeAsked),
		putRightAt: dateOf(row.putRightAt),
		answer: answerOf(row.answer),
		decision: decisionOf(row.decision),
	};
}
