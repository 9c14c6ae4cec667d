import { sql } from 'drizzle-orm';
import type { Person } from '#shared/account/person.ts';
import { users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import { isPassword } from '../../platform/password.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import type { Tries } from '../../platform/tries.ts';
import { hasCodes } from './one-time-codes.ts';
import { beginSecond } from './sign-in-steps.ts';

/** Wrong tries within a quarter of an hour. A site office shares one network address, so that limit is the wider one. */
const limits = { perEmail: 8, perAddress: 20 };

export type SignInOutcome =
	| { state: 'in'; person: Person }
	| { state: 'second'; stepToken: string }
	| { state: 'wrong' }
	| { state: 'too-many' };

/**
 * Compares address and password. An unknown address takes the same work and gets the same answer as a wrong password, and is counted
 * alike: nobody learns who has an account.
 */
export async function signIn(
	platform: Platform,
	tries: Tries,
	{ email, password }: { email: string; password: string },
	address: string,
): Promise<SignInOutcome> {
	const keys = [
		{ key: `email ${email.trim().toLowerCase()}`, limit: limits.perEmail },
		{ key: `address ${address}`, limit: limits.perAddress },
	];
	if (keys.map(({ key, limit }) => tries.take(key, limit)).includes(false)) return { state: 'too-many' };
	const [user] = await platform.db
		.select({ userId: users.id, name: users.name, email: users.email, passwordHash: users.passwordHash })
		.from(users)
		.where(sql`lower(${users.email}) = ${email.trim().toLowerCase()}`);
	if (!(await isPassword(user?.passwordHash ?? null, password)) || user === undefined) {
		await noteFailedSignIn(platform, user?.userId ?? null, address, 'password');
		return { state: 'wrong' };
	}
	for (const { key } of keys) tries.giveBack(key);
	if (await hasCodes(platform.db, user.userId))
		return { state: 'second', stepToken: await platform.transaction((tx) => beginSecond(tx, platform, user.userId, true)) };
	const person = { userId: user.userId, name: user.name, email: user.email };
	await noteSignIn(platform, { ...person, address }, 'password');
	return { state: 'in', person };
}

/** The person is in: by which way. */
export async function noteSignIn(platform: Platform, person: SignedIn, way: string): Promise<void> {
	await platform.transaction((tx) => audit(tx, person, { kind: 'signed-in', subjectId: person.userId, data: { way } }));
}

/**
 * A wrong try that was counted. It belongs to no site, so nobody on a site reads it; its person, where there is one, sees it in their
 * account. The address that was typed is not kept: it may be anybody's, or a password in the wrong field.
 */
export async function noteFailedSignIn(platform: Platform, userId: string | null, address: string, way: string): Promise<void> {
	await platform.transaction((tx) => audit(tx, { userId: null, address }, { kind: 'sign-in-failed', subjectId: userId, data: { way } }));
}
