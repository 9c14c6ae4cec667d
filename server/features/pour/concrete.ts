import { and, eq, inArray, like } from 'drizzle-orm';
import { insertRows } from '../../db/insert-rows.ts';
import { lockSite } from '../../db/lock-site.ts';
import { holdPointConditions, holdPoints, pourElements, pourHoldsSeen, pours, witnessPoints } from '../../db/schema/pour.ts';
import { audit } from '../../platform/audit.ts';
import { peopleWith } from '../../platform/membership.ts';
import { postNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Forbidden, foundOne, Refused } from '../../platform/refuse.ts';
import { actInTransaction } from './act-on-pour.ts';
import { holdTouched } from './hold-touched.ts';
import { loadOwnLife } from './load-pour.ts';

/** The concrete begins. What touches the pour is looked for first, so that nobody pours on what no longer holds. */
export async function beginConcreting(platform: Platform, member: Member, { pourId, at }: { pourId: string; at: Date }): Promise<void> {
	await holdTouched(platform, member.siteId);
	await actInTransaction(platform, member, pourId, async () => ({
		act: { kind: 'start-concreting' },
		change: { setPour: { concretingFrom: at }, entry: { kind: 'concreting-begun', data: { at: at.toISOString() } } },
	}));
}

/** Cast, whole or in part. What was not cast goes to a pour of its own (7 → 7b) with both hold points open. Answers that pour's id. */
export async function endConcreting(
	platform: Platform,
	member: Member,
	{ pourId, at, notCast }: { pourId: string; at: Date; notCast: readonly { modelId: string; globalId: string }[] },
): Promise<string | null> {
	const restPourId = notCast.length === 0 ? null : platform.newId();
	await actInTransaction(platform, member, pourId, async (tx, { pour, points }) => {
		if (pour.concretingFrom !== null && at < pour.concretingFrom)
			throw new Refused('too-early', 'The concrete cannot end before it began. Nothing was changed.', 'at');
		if (restPourId !== null) {
			const rows = await tx.select().from(pourElements).where(eq(pourElements.pourId, pourId));
			const wanted = new Set(notCast.map(({ modelId, globalId }) => `${modelId} ${globalId}`));
			const rest = rows.filter(({ modelId, globalId }) => wanted.has(`${modelId} ${globalId}`));
			if (rest.length !== wanted.size) throw new Refused('not-in-pour', 'Some of these elements are not in this pour.', 'notCast');
			if (rest.length === rows.length)
				throw new Refused('nothing-cast', 'Then nothing was cast. Name what was not cast, less than all.', 'notCast');
			await tx.insert(pours).values({
				id: restPourId,
				siteId: member.siteId,
				number: await restNumber(tx, member.siteId, pour.number),
				name: pour.name,
				companyId: pour.companyId,
				plannedAt: null,
				state: 'planned',
				partOf: pourId,
			});
			for (const modelId of new Set(rest.map((row) => row.modelId))) {
				const globalIds = rest.filter((row) => row.modelId === modelId).map(({ globalId }) => globalId);
				await tx
					.delete(pourElements)
					.where(and(eq(pourElements.pourId, pourId), eq(pourElements.modelId, modelId), inArray(pourElements.globalId, globalIds)));
			}
			await insertRows(
				tx,
				pourElements,
				rest.map((row) => ({ ...row, pourId: restPourId })),
			);
			for (const kind of ['before-pour', 'after-pour'] as const) {
				const list = points[kind].list.map(({ question }) => ({ question, answer: null }));
				await tx.insert(holdPoints).values({ id: platform.newId(), siteId: member.siteId, pourId: restPourId, kind, state: 'open', list });
			}
		}
		return {
			act: { kind: 'end-concreting', isWhole: restPourId === null },
			change: {
				setPour: { concretingTo: at },
				entry: { kind: 'concreting-ended', data: { at: at.toISOString(), notCast: notCast.length, restPourId } },
			},
		};
	});
	return restPourId;
}

/** "7b", "7c": the first letter that no pour of the site has. */
async function restNumber(tx: Parameters<Parameters<Platform['transaction']>[0]>[0], siteId: string, number: string): Promise<string> {
	const stem = number.replace(/[b-z]$/, '');
	const taken = await tx
		.select({ number: pours.number })
		.from(pours)
		.where(and(eq(pours.siteId, siteId), like(pours.number, `${stem.replaceAll(/[%_\\]/g, '\\$&')}%`)));
	const letter = [...'bcdefghijklmnopqrstuvwxyz'].find((one) => !taken.some((row) => row.number === stem + one));
	if (letter === undefined) throw new Refused('no-number', `There is no letter left for another part of pour ${stem}.`);
	return stem + letter;
}

/** "Seen" by a person, once, while the hold stands. */
export async function seeHold(platform: Platform, member: Member, pourId: string): Promise<void> {
	await actInTransaction(platform, member, pourId, async (tx, { hold }) => {
		if (hold !== null) {
			const seen = { holdId: hold.id, userId: member.userId, seenAt: platform.now() };
			const first = await tx.insert(pourHoldsSeen).values(seen).onConflictDoNothing().returning({ holdId: pourHoldsSeen.holdId });
			if (first.length === 0) throw new Conflict('You have seen this hold already.');
		}
		return { act: { kind: 'see-hold' }, change: { entry: { kind: 'hold-seen' } } };
	});
}

/** Notice of a witness point: who may come is told, nothing waits for them. */
export async function giveNotice(
	platform: Platform,
	member: Member,
	{ pourId, what, at }: { pourId: string; what: string; at: Date },
): Promise<void> {
	await platform.transaction(async (tx) => {
		const now = platform.now();
		await lockSite(tx, member.siteId);
		const { pour } = await loadOwnLife(tx, member, pourId);
		if (!member.companyIds.includes(pour.companyId)) throw new Forbidden('Notice is given by the company whose pour it is.');
		if (at <= now) throw new Refused('in-the-past', 'Give notice of something to come.', 'at');
		await tx
			.insert(witnessPoints)
			.values({ id: platform.newId(), siteId: member.siteId, pourId, what, at, noticeBy: member.userId, noticeAt: now });
		await audit(tx, member, { kind: 'witness-notice-given', subjectId: pourId, data: { number: pour.number, what, at: at.toISOString() } });
		const userIds = await peopleWith(tx, { siteId: member.siteId, roles: ['project-engineer', 'owners-representative'], now });
		await postNotices(tx, { siteId: member.siteId, actId: platform.newId(), actorId: member.userId, now }, [
			{
				kind: 'witness-notice',
				userIds,
				subjectId: pourId,
				sentence: `Witness point of pour ${pour.number}: ${what}.`,
				path: `/sites/${member.siteId}/pours/${pourId}`,
			},
		]);
	});
}

/** Came, or did not come; said once. */
export async function sayWitness(
	platform: Platform,
	member: Member,
	{ pourId, witnessId, hasCome, note }: { pourId: string; witnessId: string; hasCome: boolean; note: string | null },
): Promise<void> {
	await platform.transaction(async (tx) => {
		await lockSite(tx, member.siteId);
		const { pour } = await loadOwnLife(tx, member, pourId);
		const [witness] = await tx
			.select()
			.from(witnessPoints)
			.where(and(eq(witnessPoints.id, witnessId), eq(witnessPoints.pourId, pourId)));
		const { what, hasCome: before } = foundOne(witness === undefined ? [] : [witness]);
		if (before !== null) throw new Conflict('It is said already whether anybody came.');
		await tx
			.update(witnessPoints)
			.set({ hasCome, note, saidBy: member.userId, saidAt: platform.now() })
			.where(eq(witnessPoints.id, witnessId));
		await audit(tx, member, { kind: 'witness-said', subjectId: pourId, data: { number: pour.number, what, hasCome, note } });
	});
}

/** A condition of a release is done, and what shows it. */
export async function meetCondition(
	platform: Platform,
	member: Member,
	{ pourId, conditionId, words }: { pourId: string; conditionId: string; words: string },
): Promise<void> {
	await platform.transaction(async (tx) => {
		await lockSite(tx, member.siteId);
		const { pour, points } = await loadOwnLife(tx, member, pourId);
		const isOwn = member.roles.includes('project-engineer') || member.companyIds.includes(pour.companyId);
		if (!isOwn) throw new Forbidden('The company whose pour it is says this, or the project engineer.');
		const condition = foundOne(
			await tx
				.select()
				.from(holdPointConditions)
				.where(
					and(
						eq(holdPointConditions.id, conditionId),
						inArray(
							holdPointConditions.holdPointId,
							Object.values(points).map(({ id }) => id),
						),
					),
				),
		);
		const met = await tx
			.update(holdPointConditions)
			.set({ isMet: true, metBy: member.userId, metAt: platform.now(), metWords: words })
			.where(and(eq(holdPointConditions.id, conditionId), eq(holdPointConditions.isMet, false)))
			.returning({ id: holdPointConditions.id });
		if (met.length === 0) throw new Conflict('This condition is met already.');
		await audit(tx, member, { kind: 'condition-met', subjectId: pourId, data: { number: pour.number, condition: condition.text, words } });
		const now = platform.now();
		const roles = ['project-engineer', 'owners-representative'] as const;
		const userIds = await peopleWith(tx, { siteId: member.siteId, roles, now });
		await postNotices(tx, { siteId: member.siteId, actId: platform.newId(), actorId: member.userId, now }, [
			{
				kind: 'condition-met',
				userIds,
				subjectId: conditionId,
				sentence: `Pour ${pour.number}, condition met: ${condition.text}. ${words}`,
				path: `/sites/${member.siteId}/pours/${pourId}`,
			},
		]);
	});
}
