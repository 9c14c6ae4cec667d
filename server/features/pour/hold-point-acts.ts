import { and, eq } from 'drizzle-orm';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { lockSite } from '../../db/lock-site.ts';
import { holdPoints } from '../../db/schema/pour.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, Refused } from '../../platform/refuse.ts';
import { actInTransaction } from './act-on-pour.ts';
import { loadOwnLife } from './load-pour.ts';
import { loadShown } from './load-shown.ts';

interface AtPoint {
	pourId: string;
	point: HoldPointKind;
}

const whenWords: Record<HoldPointKind, string> = { 'before-pour': 'before the pour', 'after-pour': 'as cast' };

/** The questions of a hold-point list; what was answered stays with its question. Refused once the point is called or beyond. */
export async function setList(
	platform: Platform,
	member: Member,
	{ pourId, point, questions }: AtPoint & { questions: readonly string[] },
): Promise<void> {
	await platform.transaction(async (tx) => {
		await lockSite(tx, member.siteId);
		const { points, pour } = await loadOwnLife(tx, member, pourId);
		const { id, list, state } = points[point];
		if (!['open', 'more-asked', 'refused'].includes(state))
			throw new Refused('not-now', 'This hold point is called, so its list stays as it is answered.', 'questions');
		const answers = new Map(list.map(({ question, answer }) => [question, answer]));
		const next = [...new Set(questions)].map((question) => ({ question, answer: answers.get(question) ?? null }));
		const changed = await tx
			.update(holdPoints)
			.set({ list: next })
			.where(and(eq(holdPoints.id, id), eq(holdPoints.state, state)))
			.returning({ id: holdPoints.id });
		if (changed.length === 0) throw new Conflict();
		await audit(tx, member, {
			kind: 'hold-point-list-set',
			subjectId: pourId,
			data: { number: pour.number, holdPoint: point, before: list.length, after: next.length },
		});
	});
}

/** "Ready from Thu 06:30", by the contractor, with every question answered in the list's order. */
export async function callPoint(
	platform: Platform,
	member: Member,
	{ pourId, point, readyFrom, answers }: AtPoint & { readyFrom: Date; answers: readonly string[] },
): Promise<void> {
	await actInTransaction(platform, member, pourId, async (_tx, { pour, points }) => {
		const { list } = points[point];
		if (answers.length !== list.length) throw new Conflict('The hold-point list was changed a moment ago. Look at it again, then call.');
		const answered = list.map(({ question }, index) => ({ question, answer: answers[index] || null }));
		if (answered.some(({ answer }) => answer === null))
			throw new Refused('list-open', 'Answer every question of the hold-point list, then call.', 'answers');
		return {
			act: { kind: 'call', point },
			change: {
				point,
				set: { list: answered, readyFrom, calledBy: member.userId, calledAt: platform.now(), submittedBy: null, submittedAt: null },
				entry: { kind: 'hold-point-called', data: { readyFrom: readyFrom.toISOString() } },
				tell: {
					kind: 'hold-point-called',
					roles: ['project-engineer'],
					sentence: `${member.name} calls pour ${pour.number}, ${pour.name}, ${whenWords[point]}.`,
				},
			},
		};
	});
}

/** The project engineer hands a complete hold point to the owner's representative. */
export async function submitPoint(platform: Platform, member: Member, { pourId, point }: AtPoint): Promise<void> {
	await actInTransaction(platform, member, pourId, async (tx, { pour }) => {
		const { readiness, isListAnswered, preparedBy } = await loadShown(tx, member.siteId, pourId, point);
		return {
			act: { kind: 'submit', point },
			facts: { isReady: readiness.isReady, isListAnswered, preparedBy },
			change: {
				point,
				set: { submittedBy: member.userId, submittedAt: platform.now() },
				entry: { kind: 'hold-point-submitted' },
				tell: {
					kind: 'hold-point-submitted',
					roles: ['owners-representative'],
					sentence: `Pour ${pour.number}, ${pour.name}, waits for your release ${whenWords[point]}.`,
				},
			},
		};
	});
}

/** The owner's representative asks for more before deciding; nothing is signed. */
export async function askMore(
	platform: Platform,
	member: Member,
	{ pourId, point, statement }: AtPoint & { statement: string },
): Promise<void> {
	await actInTransaction(platform, member, pourId, async (tx, { pour }) => {
		const { readiness, isListAnswered, preparedBy } = await loadShown(tx, member.siteId, pourId, point);
		return {
			act: { kind: 'ask-more', point },
			facts: { isReady: readiness.isReady, isListAnswered, preparedBy },
			change: {
				point,
				set: { statement },
				entry: { kind: 'hold-point-asked-more', data: { statement } },
				tell: {
					kind: 'hold-point-asked-more',
					roles: ['project-engineer', 'contractor'],
					sentence: `${member.name} asks for more on pour ${pour.number}, ${pour.name}: ${statement}`,
				},
			},
		};
	});
}
