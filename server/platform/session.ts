import { createHash, randomBytes } from 'node:crypto';
import { DrizzlePostgreSQLAdapter } from '@lucia-auth/adapter-drizzle';
import { type Adapter, Lucia, TimeSpan, verifyRequestOrigin } from 'lucia';
import type { Db } from '../db/database.ts';
import { sessions, users } from '../db/schema/account.ts';
import type { SessionProof, SignedIn } from './platform.ts';

/** The only file that knows the session library (docs/decisions/002). */
export interface Sessions {
	/** A new session; answers the cookie to set. */
	create: (userId: string, from?: SessionOrigin, opened?: SessionOpening) => Promise<string>;
	/** What stands in the table for this cookie header's session, by which a person tells it from the others; null without one. */
	idOf: (cookieHeader: string | undefined) => string | null;
	/** Who sends this cookie header, and a cookie to set where the session was prolonged. */
	validate: (cookieHeader: string | undefined) => Promise<{ signedIn: SignedIn | null; cookie: string | null }>;
	/** Ends the session of this cookie header; answers the cookie that clears it. */
	end: (cookieHeader: string | undefined) => Promise<string>;
	/** Ends all of a person, as after a change of password. */
	endAll: (userId: string) => Promise<void>;
	deleteExpired: () => Promise<void>;
}

/** Where a session began: shown to its person, so that a strange one is seen. */
export interface SessionOrigin {
	userAgent: string | null;
	address: string | null;
}

/** How it was opened. */
export interface SessionOpening {
	/** A code of an app, a recovery code or a passkey was shown. */
	hasSecondFactor: boolean;
	/** On a device that others use too a session ends within half a day. */
	isOwnDevice: boolean;
}

/** A session that is used lives on, up to this long after its start. */
const longestMs = 90 * 24 * 3_600_000;
const longestOnSharedMs = 12 * 3_600_000;

declare module 'lucia' {
	interface Register {
		Lucia: Lucia<SessionProof, { name: string; email: string }>;
		DatabaseUserAttributes: { name: string; email: string };
		DatabaseSessionAttributes: SessionOrigin & SessionProof & { createdAt: Date };
	}
}

/** `isSecure`: the cookie travels by TLS only; browsers make an exception for this very machine. */
export function openSessions({ db, isSecure, now }: { db: Db; isSecure: boolean; now: () => Date }): Sessions {
	const lucia = new Lucia(hashingIds(new DrizzlePostgreSQLAdapter(db, sessions, users)), {
		sessionExpiresIn: new TimeSpan(30, 'd'),
		sessionCookie: { name: 'bb-session', attributes: { secure: isSecure, sameSite: 'lax', path: '/' } },
		getSessionAttributes: ({ freshUntil, hasSecondFactor }) => ({ freshUntil, hasSecondFactor }),
		getUserAttributes: ({ name, email }) => ({ name, email }),
	});
	const nobody = { signedIn: null, cookie: null };
	const sessionIdIn = (cookieHeader: string | undefined): string | null => {
		try {
			return lucia.readSessionCookie(cookieHeader ?? '');
		} catch {
			// A header whose escapes cannot be decoded holds no cookie of ours.
			return null;
		}
	};
	return {
		create: async (userId, { userAgent, address } = { userAgent: null, address: null }, opened) => {
			// The start, and whose device it is, are part of the secret: who changes them changes the hash, and has no session.
			const kind = opened?.isOwnDevice === false ? sharedMark : '';
			const sessionId = `${now().getTime().toString(36)}${kind}.${randomBytes(32).toString('base64url')}`;
			const session = await lucia.createSession(
				userId,
				{
					userAgent: userAgent?.slice(0, 200) ?? null,
					address,
					createdAt: now(),
					freshUntil: null,
					hasSecondFactor: opened?.hasSecondFactor ?? false,
				},
				{ sessionId },
			);
			return lucia.createSessionCookie(session.id).serialize();
		},
		validate: async (cookieHeader) => {
			const sessionId = sessionIdIn(cookieHeader);
			if (sessionId === null) return nobody;
			const { user, session } = await lucia.validateSession(sessionId);
			if (session === null) return nobody;
			if (now().getTime() - Number.parseInt(sessionId, 36) > longestOf(sessionId)) {
				await lucia.invalidateSession(sessionId);
				return nobody;
			}
			const { freshUntil, hasSecondFactor } = session;
			const signedIn = { userId: user.id, name: user.name, email: user.email, proof: { freshUntil, hasSecondFactor } };
			return { signedIn, cookie: session.fresh ? lucia.createSessionCookie(sessionId).serialize() : null };
		},
		idOf: (cookieHeader) => {
			const sessionId = sessionIdIn(cookieHeader);
			return sessionId === null ? null : hashedId(sessionId);
		},
		end: async (cookieHeader) => {
			const sessionId = sessionIdIn(cookieHeader);
			if (sessionId !== null) await lucia.invalidateSession(sessionId);
			return lucia.createBlankSessionCookie().serialize();
		},
		endAll: (userId) => lucia.invalidateUserSessions(userId),
		deleteExpired: () => lucia.deleteExpiredSessions(),
	};
}

const sharedMark = '-shared';

function longestOf(sessionId: string): number {
	return sessionId.split('.', 1)[0]?.endsWith(sharedMark) ? longestOnSharedMs : longestMs;
}

function hashedId(sessionId: string): string {
	return createHash('sha256').update(sessionId).digest('hex');
}

/** The table holds the SHA-256 of what the cookie holds: who reads the table or a backup of it is not signed in. */
function hashingIds(adapter: Adapter): Adapter {
	return {
		getSessionAndUser: async (sessionId) => {
			const [session, user] = await adapter.getSessionAndUser(hashedId(sessionId));
			return [session && { ...session, id: sessionId }, user];
		},
		getUserSessions: (userId) => adapter.getUserSessions(userId),
		setSession: (session) => adapter.setSession({ ...session, id: hashedId(session.id) }),
		updateSessionExpiration: (sessionId, expiresAt) => adapter.updateSessionExpiration(hashedId(sessionId), expiresAt),
		deleteSession: (sessionId) => adapter.deleteSession(hashedId(sessionId)),
		deleteUserSessions: (userId) => adapter.deleteUserSessions(userId),
		deleteExpiredSessions: () => adapter.deleteExpiredSessions(),
	};
}

/** A request that changes something must come from a page of ours: browsers send Origin with each such request. */
export function isOwnOrigin(origin: string | undefined, host: string | undefined): boolean {
	return origin !== undefined && host !== undefined && verifyRequestOrigin(origin, [host]);
}
