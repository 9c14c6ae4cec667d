import { and, asc, eq, inArray } from 'drizzle-orm';
import { actOnFlag } from '#shared/flag/act-on-flag.ts';
import type { FlagLife } from '#shared/flag/flag-life.ts';
import { maySeeFlag } from '#shared/flag/may-act.ts';
import type { AuditKind } from '#shared/record/audit-entry.ts';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { broughtPoints, flagActs, flagAnswers, flagDecisions, flags } from '../../db/schema/flag.ts';
import { auditEach } from '../../platform/audit.ts';
import { postNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Forbidden, NotFound, Refused } from '../../platform/refuse.ts';
import { flagMomentOf } from './flag-moment.ts';
import { noticesOfAct, type PersonsAct } from './flag-notices.ts';
import { columnsOf, type FlagRow, lifeOf } from './flag-rows.ts';

/** A flag that is acted on, and the version of it that its doer saw. */
export interface FlagTarget {
	flagId: string;
	version: number;
}

const auditKindOf: Record<PersonsAct['kind'], AuditKind> = {
	answer: 'flag-answered',
	'ask-time': 'flag-time-asked',
	'grant-time': 'flag-time-granted',
	decide: 'flag-decided',
	consent: 'flag-consented',
	'put-right': 'flag-put-right',
};

/**
 * One act on several flags, all or none. NOT_FOUND for one that is not there or not this member's to see, CONFLICT where one was changed since it
 * was looked at, REFUSED with its number where its state does not allow the act. An act that was done already (its receipt was lost on the way)
 * is answered as it was then.
 */
export async function actOnFlags(
	platform: Platform,
	member: Member,
	targets: readonly FlagTarget[],
	act: PersonsAct,
	{ actId = platform.newId(), consentReason = null }: { actId?: string | undefined; consentReason?: string | null } = {},
): Promise<{ changed: number; actId: string }> {
	const seenVersion = new Map(targets.map(({ flagId, version }) => [flagId, version]));
	return platform.transaction(async (tx) => {
		const now = platform.now();
		const rows = await tx
			.select()
			.from(flags)
			.where(and(eq(flags.siteId, member.siteId), inArray(flags.id, [...seenVersion.keys()])))
			.orderBy(asc(flags.id))
			.for('update');
		if (rows.length < seenVersion.size || rows.some((row) => !maySeeFlag(member, row))) throw new NotFound();
		const before = await tx.select().from(flagActs).where(eq(flagActs.actId, actId));
		if (before.length > 0) return doneBefore(before, member, actId);
		const moment = await flagMomentOf(tx, member.siteId, now);
		if (act.kind === 'answer' && act.answer.kind === 'contest') await refuseForeignSurvey(tx, member, act.answer.ownSurveyId);
		const changed = rows
			.toSorted((a, b) => a.number - b.number)
			.map((row) => ({ row, after: acted(row, act, member, moment, seenVersion) }));
		for (const { row, after } of changed) {
			const { companyId: _, ...columns } = columnsOf(after);
			const updated = await tx
				.update(flags)
				.set({ ...columns, version: row.version + 1, changedAt: now })
				.where(and(eq(flags.id, row.id), eq(flags.version, row.version)))
				.returning({ id: flags.id });
			if (updated.length === 0) throw changedMeanwhile(row);
		}
		await keepSaid(tx, platform, member, act, changed, consentReason, now);
		await insertRows(
			tx,
			flagActs,
			changed.map(({ row }) => ({
				actId,
				siteId: member.siteId,
				flagId: row.id,
				kind: act.kind,
				actorId: member.userId,
				actedAt: now,
				versionAfter: row.version + 1,
				before: lifeOf(row),
				takenBackAt: null,
			})),
		);
		await postNotices(tx, { siteId: member.siteId, actId, actorId: member.userId, now }, await noticesOfAct(tx, member, act, changed, now));
		await auditEach(
			tx,
			member,
			changed.map(({ row, after }) => ({
				kind: auditKindOf[act.kind],
				subjectId: row.id,
				data: {
					number: row.number,
					mark: row.mark,
					before: row.state,
					after: after.state,
					act,
					at: now,
					...(consentReason && { reason: consentReason }),
				},
			})),
			now,
		);
		return { changed: changed.length, actId };
	});
}

function doneBefore(before: readonly (typeof flagActs.$inferSelect)[], { siteId, userId }: Member, actId: string) {
	if (before.some((one) => one.siteId !== siteId || one.actorId !== userId)) throw new NotFound();
	return { changed: before.length, actId };
}

/** A contest names a survey of the own company's points, no other. */
async function refuseForeignSurvey(tx: Transaction, { siteId, companyIds }: Member, surveyId: string | null): Promise<void> {
	if (surveyId === null) return;
	const owned = await tx
		.select({ id: broughtPoints.id })
		.from(broughtPoints)
		.where(and(eq(broughtPoints.siteId, siteId), eq(broughtPoints.surveyId, surveyId), inArray(broughtPoints.companyId, [...companyIds])));
	if (owned.length === 0)
		throw new Refused('not-your-survey', 'This is no survey of points that your company has brought.', 'answer.ownSurveyId');
}

function acted(
	row: FlagRow,
	act: PersonsAct,
	member: Member,
	moment: Parameters<typeof actOnFlag>[3],
	seenVersion: ReadonlyMap<string, number>,
): FlagLife {
	const outcome = actOnFlag(lifeOf(row), act, member, moment);
	if (!outcome.ok && outcome.refusal.code === 'not-yours') throw new Forbidden(outcome.refusal.message);
	// Before the state is told: what was refused may be so only because of what came between.
	if (seenVersion.get(row.id) !== row.version) throw changedMeanwhile(row);
	if (!outcome.ok)
		throw new Refused(outcome.refusal.code, `Flag ${row.number}, ${row.mark}: ${outcome.refusal.message}`, `flags.${row.id}`);
	return outcome.flag;
}

function changedMeanwhile(row: FlagRow): Conflict {
	return new Conflict(`Flag ${row.number}, ${row.mark}, was changed a moment ago, so nothing was done. Look again, then decide.`);
}

async function keepSaid(
	tx: Transaction,
	{ newId }: Pick<Platform, 'newId'>,
	member: Member,
	act: PersonsAct,
	changed: readonly { row: FlagRow; after: FlagLife }[],
	consentReason: string | null,
	now: Date,
): Promise<void> {
	const { siteId, userId } = member;
	if (act.kind === 'answer') {
		const rows = changed.map(({ row }) => ({
			id: newId(),
			siteId,
			flagId: row.id,
			round: row.round,
			answer: act.answer,
			answeredBy: userId,
			answeredAt: now,
		}));
		await insertRows(tx, flagAnswers, rows);
	}
	if (act.kind === 'decide') {
		const rows = changed.map(({ row, after }) => ({
			id: newId(),
			siteId,
			flagId: row.id,
			round: row.round,
			decision: act.decision,
			isWithoutAnswer: after.isDecidedWithoutAnswer,
			checkId: row.checkId,
			worstMm: row.worstMm,
			decidedBy: userId,
			decidedAt: now,
			isConsentGiven: null,
			consentReason: null,
			consentBy: null,
			consentAt: null,
		}));
		await insertRows(tx, flagDecisions, rows);
	}
	if (act.kind === 'consent') {
		for (const { row } of changed) {
			const [newest] = (
				await tx.select().from(flagDecisions).where(eq(flagDecisions.flagId, row.id)).orderBy(asc(flagDecisions.decidedAt))
			).slice(-1);
			if (newest === undefined) throw new Error('A concession without its decision.');
			await tx
				.update(flagDecisions)
				.set({ isConsentGiven: act.isGiven, consentReason, consentBy: userId, consentAt: now })
				.where(eq(flagDecisions.id, newest.id));
		}
	}
}
