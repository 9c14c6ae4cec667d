import { sql } from 'drizzle-orm';
import type { Person } from '#shared/account/contract.ts';
import { users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import { isPassword } from '../../platform/password.ts';
import type { Platform } from '../../platform/platform.ts';
import type { Tries } from '../../platform/tries.ts';

/** Wrong tries within a quarter of an hour. A site office shares one network address, so that limit is the wider one. */
const limits = { perEmail: 8, perAddress: 20 };

export type SignInOutcome = { state: 'in'; person: Person } | { state: 'wrong' } | { state: 'too-many' };

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
	if (!(await isPassword(user?.passwordHash ?? null, password)) || user === undefined) return { state: 'wrong' };
	for (const { key } of keys) tries.giveBack(key);
	const person = { userId: user.userId, name: user.name, email: user.email };
	await platform.transaction((tx) => audit(tx, { ...person, address }, { kind: 'signed-in', subjectId: user.userId, data: {} }));
	return { state: 'in', person };
}
