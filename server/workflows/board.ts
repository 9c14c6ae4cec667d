import { and, asc, desc, eq, gt, inArray, isNull, lte, or } from 'drizzle-orm';
import { mayWith, type Role } from '#shared/permissions.ts';
import { boardOf } from '#shared/site/board.ts';
import type { BoardFacts } from '#shared/site/board-facts.ts';
import type { Handle } from '../db/database.ts';
import { users } from '../db/schema/account.ts';
import { fits } from '../db/schema/fit.ts';
import { holdPointConditions, holdPoints, pourHolds, pourHoldsSeen } from '../db/schema/pour.ts';
import { invitations, memberships } from '../db/schema/site.ts';
import { setups } from '../db/schema/survey.ts';
import { sheets } from '../db/schema/tolerance.ts';
import { checksOf } from '../features/check/queries.ts';
import { flagsOf } from '../features/flag/queries.ts';
import { poursOf } from '../features/pour/queries.ts';
import { siteDetailOf } from '../features/site/queries.ts';
import { surveysOf } from '../features/survey/queries.ts';
import { siteRoutes } from '../platform/guard.ts';
import type { Member } from '../platform/platform.ts';
import { siteSettingsOf } from '../platform/site-settings.ts';

/** What waits for the member, and what waits on others: read across the nouns as the member may see them, told by one pure list. */
export const boardRoute = siteRoutes.site.board.handler(async ({ context: { platform, member } }) =>
	boardOf(await boardFactsOf(platform.db, member, platform.now())),
);

async function boardFactsOf(db: Handle, member: Member, now: Date): Promise<BoardFacts> {
	const { siteId, userId, roles, companyIds } = member;
	const pours = await poursOf(db, member);
	const pourIds = pours.map(({ pourId }) => pourId);
	const points = await db
		.select()
		.from(holdPoints)
		.where(and(eq(holdPoints.siteId, siteId), inArray(holdPoints.pourId, pourIds)));
	return {
		now,
		userId,
		roles,
		companyIds,
		line: (await siteDetailOf(db, member, now)).line,
		surveys: await surveysOf(db, siteId),
		checks: await checksOf(db, member),
		flags: await flagsOf(db, member),
		pours,
		holdPoints: points,
		conditions: await openConditions(
			db,
			points.map(({ id, pourId }) => ({ id, pourId })),
		),
		unseenHolds: await unseenHolds(db, member, pourIds),
		uncheckedFits: await uncheckedFits(db, siteId),
		drafts: await db
			.select({ sheetId: sheets.id, name: sheets.name })
			.from(sheets)
			.where(and(eq(sheets.siteId, siteId), eq(sheets.state, 'draft'))),
		invitations: mayWith(roles, 'company.write') ? await openInvitations(db, siteId, now) : null,
		holders: await holdersOf(db, siteId, now),
	};
}

async function openConditions(db: Handle, points: readonly { id: string; pourId: string }[]): Promise<BoardFacts['conditions']> {
	const ids = points.map(({ id }) => id);
	const rows = await db
		.select()
		.from(holdPointConditions)
		.where(and(inArray(holdPointConditions.holdPointId, ids), eq(holdPointConditions.isMet, false)))
		.orderBy(asc(holdPointConditions.dueAt));
	const pourIds = new Map(points.map(({ id, pourId }) => [id, pourId]));
	return rows.map(({ holdPointId, text, owner, dueAt }) => ({ pourId: pourIds.get(holdPointId) ?? '', text, owner, dueAt }));
}

async function unseenHolds(db: Handle, member: Member, pourIds: readonly string[]): Promise<BoardFacts['unseenHolds']> {
	return db
		.select({ pourId: pourHolds.pourId, reasons: pourHolds.reasons, raisedAt: pourHolds.raisedAt })
		.from(pourHolds)
		.leftJoin(pourHoldsSeen, and(eq(pourHoldsSeen.holdId, pourHolds.id), eq(pourHoldsSeen.userId, member.userId)))
		.where(
			and(
				eq(pourHolds.siteId, member.siteId),
				inArray(pourHolds.pourId, [...pourIds]),
				isNull(pourHolds.endedAt),
				isNull(pourHoldsSeen.userId),
			),
		);
}

async function uncheckedFits(db: Handle, siteId: string): Promise<BoardFacts['uncheckedFits']> {
	const { settings } = await siteSettingsOf(db, siteId);
	if (!settings.isFitCheckedBySecond) return [];
	return db
		.select({
			fitId: fits.id,
			number: fits.number,
			surveyId: setups.surveyId,
			setupId: fits.setupId,
			adoptedById: fits.adoptedBy,
			adoptedAt: fits.adoptedAt,
		})
		.from(fits)
		.innerJoin(setups, eq(setups.id, fits.setupId))
		.where(and(eq(fits.siteId, siteId), eq(fits.state, 'adopted'), isNull(fits.checkedBy)))
		.orderBy(desc(fits.number));
}

async function openInvitations(db: Handle, siteId: string, now: Date): Promise<BoardFacts['invitations']> {
	return db
		.select({ email: invitations.email, sentAt: invitations.sentAt })
		.from(invitations)
		.where(
			and(eq(invitations.siteId, siteId), isNull(invitations.acceptedAt), isNull(invitations.endedAt), gt(invitations.expiresAt, now)),
		);
}

async function holdersOf(db: Handle, siteId: string, now: Date): Promise<BoardFacts['holders']> {
	const rows = await db
		.selectDistinct({ role: memberships.role, name: users.name })
		.from(memberships)
		.innerJoin(users, eq(users.id, memberships.userId))
		.where(and(eq(memberships.siteId, siteId), lte(memberships.fromAt, now), or(isNull(memberships.leftAt), gt(memberships.leftAt, now))))
		.orderBy(asc(users.name));
	const holders: Partial<Record<Role, string[]>> = {};
	for (const { role, name } of rows) holders[role] = [...(holders[role] ?? []), name];
	return holders;
}
