import { and, desc, eq, gt, isNotNull, ne } from 'drizzle-orm';
import type { OwnSession } from '#shared/account/contract.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { sessions } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import type { SignedIn } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';

/** Where one is signed in, the newest first. */
export async function sessionsOf(db: Handle, { userId }: SignedIn, currentId: string | null, now: Date): Promise<OwnSession[]> {
	const rows = await db
		.select()
		.from(sessions)
		.where(and(eq(sessions.userId, userId), gt(sessions.expiresAt, now)))
		.orderBy(desc(sessions.createdAt), desc(sessions.expiresAt));
	return rows.map(({ id, createdAt, userAgent, address, expiresAt }) => ({
		sessionId: id,
		createdAt,
		userAgent,
		address,
		expiresAt,
		isThis: id === currentId,
	}));
}

/** Ends one of the person's own, or all but the current one; answers how many. NOT_FOUND for one that is not theirs. */
export async function endSessions(tx: Transaction, person: SignedIn, currentId: string | null, sessionId: string | null): Promise<number> {
	const which =
		sessionId === null ? (currentId === null ? isNotNull(sessions.id) : ne(sessions.id, currentId)) : eq(sessions.id, sessionId);
	const ended = await tx
		.delete(sessions)
		.where(and(eq(sessions.userId, person.userId), which))
		.returning({ id: sessions.id });
	if (sessionId !== null) foundOne(ended);
	await audit(tx, person, { kind: 'sessions-ended', subjectId: person.userId, data: { ended: ended.length } });
	return ended.length;
}
