import { createHash } from 'node:crypto';
import { eq } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import { actOnPour, type HoldPointKind } from '#shared/pour/pour-life.ts';
import type { RecordSigner } from '#shared/record/sealed-record.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { users } from '../../db/schema/account.ts';
import { holdPointConditions } from '../../db/schema/pour.ts';
import { sealedRecords } from '../../db/schema/record.ts';
import { memberships } from '../../db/schema/site.ts';
import { peopleWith } from '../../platform/membership.ts';
import { type Notice, postNotices } from '../../platform/notices.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Forbidden, Refused } from '../../platform/refuse.ts';
import { requireFresh, requireSecondFactor } from '../../platform/second-factor.ts';
import { applyAct } from './act-on-pour.ts';
import { type LoadedLife, loadOwnLife } from './load-pour.ts';
import { loadShown, shownText } from './load-shown.ts';

/** Raised with every change of what a pour's readiness or verdicts follow from. */
const engineVersion = '1';

export interface Signed {
	recordId: string;
	sequence: number;
	head: string;
}

interface Decision {
	pourId: string;
	point: HoldPointKind;
	statement: string;
}

const everybodyConcerned: readonly Role[] = ['site-engineer', 'project-engineer', 'contractor', 'owners-representative'];

/** Who signs has proved who they are within ten minutes, with a second factor where the site asks for one. */
async function requireSigner(platform: Platform, member: Member): Promise<void> {
	await requireSecondFactor(platform.db, member);
	requireFresh(member, platform.now());
}

/**
 * Releases a hold point, with conditions or without, or refuses it: what is signed is what was shown, by its hash, as it stands inside the
 * transaction. The sealed record is made in the same transaction and is in the journal before this resolves.
 * CONFLICT where something of it changed since it was shown, or another signed first; REFUSED for who prepared it.
 */
export async function signDecision(
	platform: Platform,
	member: Member,
	decision: Decision & { shownSha256: string } & (
			| { act: 'release'; conditions: readonly { text: string; owner: string; dueAt: Date | null; proof: string }[] }
			| { act: 'refuse' }
		),
): Promise<Signed> {
	await requireSigner(platform, member);
	const { pourId, point, statement } = decision;
	const conditions = decision.act === 'release' ? decision.conditions : [];
	const signed = await platform.transaction(async (tx): Promise<Signed> => {
		await lockSite(tx, member.siteId);
		const now = platform.now();
		const loaded = await loadOwnLife(tx, member, pourId);
		const { shown, preparedBy, isListAnswered, readiness } = await loadShown(tx, member.siteId, pourId, point);
		const act =
			decision.act === 'release'
				? ({ kind: 'release', point, conditionCount: conditions.length } as const)
				: ({ kind: 'refuse', point } as const);
		const facts = { isListAnswered, isReady: readiness.isReady, preparedBy };
		// Who may not sign is told so before anything of the content is compared.
		const allowed = actOnPour(loaded.life, act, member, facts);
		if (!allowed.ok && allowed.refusal.code === 'not-yours') throw new Forbidden(allowed.refusal.message);
		if (!allowed.ok && allowed.refusal.code !== 'not-ready') throw new Refused(allowed.refusal.code, allowed.refusal.message);
		if (hashOf(shownText(shown)) !== decision.shownSha256)
			throw new Conflict('Something of this pour changed after it was shown to you, so nothing was signed. Look at it again, then sign.');
		const before = await lastRecord(tx, loaded.points[point].recordId);
		const recordId = platform.newId();
		const sealed = await platform.records.seal(
			tx,
			member.siteId,
			{
				recordId,
				act: decision.act === 'refuse' ? 'refused' : conditions.length > 0 ? 'released-with-conditions' : 'released',
				statement,
				signer: await signerOf(tx, member, now),
				engineVersion,
				supersedes: before,
				conditions: conditions.map(({ dueAt, ...condition }) => ({ ...condition, dueAt: dueAt?.toISOString() ?? null })),
				shown,
			},
			now,
		);
		const isRelease = decision.act === 'release';
		await applyAct(
			tx,
			{ member, loaded, act, now, newId: platform.newId },
			{
				point,
				set: { statement, signedBy: member.userId, signedAt: sealed.signedAt, recordId },
				entry: {
					kind: isRelease ? 'hold-point-released' : 'hold-point-refused',
					data: { statement, record: sealed.sequence, sha256: sealed.sha256, conditions: conditions.length },
				},
				tell: {
					kind: isRelease ? 'hold-point-released' : 'hold-point-refused',
					roles: everybodyConcerned,
					sentence: `Pour ${loaded.pour.number}, ${loaded.pour.name}, is ${isRelease ? 'released' : 'refused'} ${point === 'before-pour' ? 'before the pour' : 'as cast'} by ${member.name}${conditions.length > 0 ? ', with conditions' : ''}.`,
				},
			},
			facts,
		);
		// Conditions of an earlier signature stand in its record; these are the ones that hold now.
		await tx.delete(holdPointConditions).where(eq(holdPointConditions.holdPointId, loaded.points[point].id));
		if (conditions.length > 0) {
			await tx.insert(holdPointConditions).values(
				conditions.map(({ text, owner, dueAt, proof }) => ({
					id: platform.newId(),
					holdPointId: loaded.points[point].id,
					text,
					owner,
					proof,
					dueAt,
					isMet: false,
				})),
			);
		}
		await tellMore(tx, platform, member, loaded, {
			isLifted: isRelease && point === 'before-pour' && loaded.hold !== null,
			conditions: conditions.map(({ text, owner }) => `${text} (${owner})`),
		});
		return { recordId, sequence: sealed.sequence, head: sealed.sha256 };
	});
	await platform.records.journal(member.siteId);
	return signed;
}

/** What a release brings besides itself: the end of a hold to all concerned, its conditions to who meets them. */
async function tellMore(
	tx: Transaction,
	platform: Platform,
	member: Member,
	{ pour }: LoadedLife,
	{ isLifted, conditions }: { isLifted: boolean; conditions: readonly string[] },
): Promise<void> {
	const now = platform.now();
	const about = { subjectId: pour.id, path: `/sites/${member.siteId}/pours/${pour.id}` };
	const ask = (roles: readonly Role[]) => peopleWith(tx, { siteId: member.siteId, roles, companyId: pour.companyId, now });
	const told: Notice[] = [];
	if (isLifted)
		told.push({
			...about,
			kind: 'hold-lifted',
			userIds: await ask(everybodyConcerned),
			sentence: `The hold on pour ${pour.number}, ${pour.name}, is lifted: it is released anew.`,
		});
	if (conditions.length > 0)
		told.push({
			...about,
			kind: 'condition-set',
			userIds: await ask(['project-engineer', 'contractor']),
			sentence: `Pour ${pour.number}, ${pour.name}, is released on condition: ${conditions.join('; ')}.`,
		});
	// One id each: a person is told once of a thing in one act, and these are two things.
	for (const notice of told)
		await postNotices(tx, { siteId: member.siteId, actId: platform.newId(), actorId: member.userId, now }, [notice]);
}

/** Takes a release back by a record of its own. Before the concrete the pour is held from then on. */
export async function withdrawRelease(platform: Platform, member: Member, { pourId, point, statement }: Decision): Promise<Signed> {
	await requireSigner(platform, member);
	const signed = await platform.transaction(async (tx): Promise<Signed> => {
		await lockSite(tx, member.siteId);
		const now = platform.now();
		const loaded = await loadOwnLife(tx, member, pourId);
		const { preparedBy } = await loadShown(tx, member.siteId, pourId, point);
		const act = { kind: 'withdraw', point } as const;
		const facts = { isListAnswered: true, isReady: true, preparedBy };
		const allowed = actOnPour(loaded.life, act, member, facts);
		if (!allowed.ok)
			throw allowed.refusal.code === 'not-yours'
				? new Forbidden(allowed.refusal.message)
				: new Refused(allowed.refusal.code, allowed.refusal.message);
		const withdraws = await lastRecord(tx, loaded.points[point].recordId);
		if (withdraws === null) throw new Refused('no-record', 'There is no record of a release that could be withdrawn.');
		const recordId = platform.newId();
		const { number, name } = loaded.pour;
		const sealed = await platform.records.seal(
			tx,
			member.siteId,
			{
				recordId,
				act: 'withdrawn',
				statement,
				signer: await signerOf(tx, member, now),
				engineVersion,
				withdraws,
				pour: { pourId, number, name, holdPoint: point },
			},
			now,
		);
		await applyAct(
			tx,
			{ member, loaded, act, now, newId: platform.newId },
			{
				point,
				set: { statement, signedBy: member.userId, signedAt: sealed.signedAt, recordId },
				holdReasons: [`${member.name} withdrew the release: ${statement}`],
				entry: { kind: 'release-withdrawn', data: { statement, record: sealed.sequence, sha256: sealed.sha256 } },
				tell: {
					kind: 'hold',
					roles: everybodyConcerned,
					sentence: `Hold: do not pour ${number}, ${name}. ${member.name} withdrew the release: ${statement}`,
				},
			},
			facts,
		);
		return { recordId, sequence: sealed.sequence, head: sealed.sha256 };
	});
	await platform.records.journal(member.siteId);
	return signed;
}

export function hashOf(text: string): string {
	return createHash('sha256').update(text, 'utf8').digest('hex');
}

async function lastRecord(db: Handle, recordId: string | null): Promise<string | null> {
	if (recordId === null) return null;
	const [record] = await db.select({ sha256: sealedRecords.sha256 }).from(sealedRecords).where(eq(sealedRecords.id, recordId));
	return record?.sha256 ?? null;
}

async function signerOf(db: Handle, member: Member, now: Date): Promise<RecordSigner> {
	const rows = await db
		.select({ deputyFor: users.name, siteId: memberships.siteId, fromAt: memberships.fromAt, leftAt: memberships.leftAt })
		.from(memberships)
		.innerJoin(users, eq(users.id, memberships.deputyFor))
		.where(eq(memberships.userId, member.userId));
	const deputy = rows.find(({ siteId, fromAt, leftAt }) => siteId === member.siteId && fromAt <= now && (leftAt === null || leftAt > now));
	return {
		userId: member.userId,
		name: member.name,
		as: [...member.roles],
		deputyFor: deputy?.deputyFor ?? null,
		recognised: member.proof?.hasSecondFactor
			? 'sign-in with a second factor, said again within ten minutes'
			: 'sign-in, said again within ten minutes',
	};
}
