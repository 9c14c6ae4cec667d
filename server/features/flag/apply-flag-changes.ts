import { and, eq, max } from 'drizzle-orm';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { flags } from '../../db/schema/flag.ts';
import { storableText } from '../../db/storable-text.ts';
import { auditEach } from '../../platform/audit.ts';
import { postNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict } from '../../platform/refuse.ts';
import { noticesOfReopening } from './flag-notices.ts';
import { columnsOf, type FlagRow } from './flag-rows.ts';
import type { FlagChanges } from './plan-flag-changes.ts';

/** Writes what a check that was published or withdrawn does to the flags, with an audit entry each; answers the ids of those raised. The site is locked by the caller. */
export async function applyFlagChanges(
	tx: Transaction,
	{ newId, now }: Pick<Platform, 'newId' | 'now'>,
	member: Member,
	{ raised, changed }: FlagChanges,
	/** Of what is told: one id for the whole act, so that it can be taken back. */
	actId: string = newId(),
): Promise<{ raisedIds: string[] }> {
	const { siteId } = member;
	const changedAt = now();
	for (const { row, after, words, worst } of changed) {
		const { companyId: _, ...columns } = columnsOf(after);
		const updated = await tx
			.update(flags)
			.set({
				...columns,
				...(worst && { worst }),
				lapsedWords: words === null ? row.lapsedWords : storableText(words),
				version: row.version + 1,
				changedAt,
			})
			.where(and(eq(flags.siteId, siteId), eq(flags.id, row.id), eq(flags.version, row.version)))
			.returning({ id: flags.id });
		if (updated.length === 0) throw new Conflict(`Flag ${row.number} was changed a moment ago. Look again.`);
	}
	const reopened = changed.filter(({ row, after }) => after.round > row.round);
	await postNotices(
		tx,
		{ siteId, actId, actorId: member.userId, now: changedAt },
		await noticesOfReopening(tx, siteId, reopened, changedAt),
	);
	const [highest] = await tx
		.select({ number: max(flags.number) })
		.from(flags)
		.where(eq(flags.siteId, siteId));
	const first = (highest?.number ?? 0) + 1;
	const rows = raised.map(({ standing, life, mark, title }, index): FlagRow => {
		const { modelId, globalId, kind, checkId } = standing;
		return {
			...columnsOf(life),
			id: newId(),
			siteId,
			number: first + index,
			modelId,
			globalId,
			kind,
			mark,
			title,
			worst: standing.worst,
			raisedCheckId: checkId,
			raisedAt: changedAt,
			lapsedWords: null,
			version: 1,
			changedAt,
		};
	});
	await insertRows(tx, flags, rows);
	await auditEach(
		tx,
		member,
		[
			...changed.map(({ row, act, after, words }) => ({
				kind: act.kind === 'lapse' ? ('flag-lapsed' as const) : ('flag-measured-again' as const),
				subjectId: row.id,
				data: { number: row.number, before: row.state, after: after.state, act, ...(words === null ? {} : { words }) },
			})),
			...rows.map(({ id, number, mark, kind, verdict, worstMm, isWith, answerBy, checkId }) => ({
				kind: 'flag-raised' as const,
				subjectId: id,
				data: { number, mark, kind, verdict, worstMm, isWith, answerBy, checkId },
			})),
		],
		changedAt,
	);
	return { raisedIds: rows.map(({ id }) => id) };
}
