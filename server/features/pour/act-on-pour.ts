import { and, eq, isNull } from 'drizzle-orm';
import type { NoticeKind } from '#shared/mail/notice.ts';
import type { Role } from '#shared/permissions.ts';
import { actOnPour, type HoldPointKind, type PourAct, type PourFacts } from '#shared/pour/pour-life.ts';
import type { AuditKind } from '#shared/record/audit-entry.ts';
import type { Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { holdPoints, pourHolds, pours } from '../../db/schema/pour.ts';
import { audit } from '../../platform/audit.ts';
import { peopleWith } from '../../platform/membership.ts';
import { postNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Forbidden, Refused } from '../../platform/refuse.ts';
import { type LoadedLife, loadOwnLife } from './load-pour.ts';

const noFacts: PourFacts = { isListAnswered: false, isReady: false, preparedBy: [] };

/** What an act changes besides the states that follow from it. */
export interface PourChange {
	point?: HoldPointKind;
	/** Columns of that hold point. */
	set?: Partial<typeof holdPoints.$inferInsert>;
	/** Columns of the pour. */
	setPour?: Partial<typeof pours.$inferInsert>;
	/** Why it is held, where the act holds it. */
	holdReasons?: string[];
	entry: { kind: AuditKind; data?: Record<string, unknown> };
	tell?: { kind: NoticeKind; roles: readonly Role[]; sentence: string };
}

/**
 * One person's act on a pour, inside the caller's transaction with the site locked: by the rules of `pour-life.ts`, the change by the state
 * that was seen, its audit entry and its notices. A role that does not reach is FORBIDDEN, a state that does not allow it REFUSED.
 */
export async function applyAct(
	tx: Transaction,
	{ member, loaded, act, now, newId }: { member: Member; loaded: LoadedLife; act: PourAct; now: Date; newId: () => string },
	change: PourChange,
	facts: PourFacts = noFacts,
): Promise<void> {
	const { pour, points, hold, life } = loaded;
	const outcome = actOnPour(life, act, { userId: member.userId, roles: member.roles, companyIds: member.companyIds }, facts);
	if (!outcome.ok) {
		if (outcome.refusal.code === 'not-yours') throw new Forbidden(outcome.refusal.message);
		throw new Refused(outcome.refusal.code, outcome.refusal.message);
	}
	const next = outcome.pour;
	if (change.point !== undefined) {
		const point = points[change.point];
		const changed = await tx
			.update(holdPoints)
			.set({ ...change.set, state: next.points[change.point] })
			.where(and(eq(holdPoints.id, point.id), eq(holdPoints.state, point.state)))
			.returning({ id: holdPoints.id });
		if (changed.length === 0) throw new Conflict();
	}
	if (next.state !== life.state || change.setPour !== undefined) {
		const changed = await tx
			.update(pours)
			.set({ ...change.setPour, state: next.state })
			.where(and(eq(pours.id, pour.id), eq(pours.state, life.state)))
			.returning({ id: pours.id });
		if (changed.length === 0) throw new Conflict();
	}
	if (!life.isHeld && next.isHeld) {
		await tx.insert(pourHolds).values({
			id: newId(),
			siteId: member.siteId,
			pourId: pour.id,
			reasons: change.holdReasons ?? [],
			raisedAt: now,
			raisedBy: member.userId,
		});
		await audit(tx, member, { kind: 'pour-held', subjectId: pour.id, data: { number: pour.number, reasons: change.holdReasons ?? [] } });
	}
	if (life.isHeld && !next.isHeld && hold !== null) {
		await tx
			.update(pourHolds)
			.set({ endedAt: now })
			.where(and(eq(pourHolds.id, hold.id), isNull(pourHolds.endedAt)));
	}
	const { entry, tell } = change;
	await audit(tx, member, {
		kind: entry.kind,
		subjectId: pour.id,
		data: {
			number: pour.number,
			...(change.point && { holdPoint: change.point, before: points[change.point].state, after: next.points[change.point] }),
			...entry.data,
		},
	});
	if (tell !== undefined) {
		const userIds = await peopleWith(tx, { siteId: member.siteId, roles: tell.roles, companyId: pour.companyId, now });
		await postNotices(tx, { siteId: member.siteId, actId: newId(), actorId: member.userId, now }, [
			{ kind: tell.kind, userIds, subjectId: pour.id, sentence: tell.sentence, path: `/sites/${member.siteId}/pours/${pour.id}` },
		]);
	}
}

/** Locks the site, loads the pour for the member, and does one act with its change. */
export async function actInTransaction(
	platform: Platform,
	member: Member,
	pourId: string,
	work: (tx: Transaction, loaded: LoadedLife) => Promise<{ act: PourAct; change: PourChange; facts?: PourFacts }>,
): Promise<void> {
	await platform.transaction(async (tx) => {
		await lockSite(tx, member.siteId);
		const loaded = await loadOwnLife(tx, member, pourId);
		const { act, change, facts } = await work(tx, loaded);
		await applyAct(tx, { member, loaded, act, now: platform.now(), newId: platform.newId }, change, facts);
	});
}
