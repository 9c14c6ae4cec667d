import { eq } from 'drizzle-orm';
import { users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import { hashPassword, isPassword } from '../../platform/password.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import { postMail } from '../../platform/post-mail.ts';
import { Conflict } from '../../platform/refuse.ts';
import type { Tries } from '../../platform/tries.ts';
import { expectGoodPassword } from './good-password.ts';
import { endSessions } from './own-sessions.ts';
import { changedLetter } from './password-letters.ts';

const wrongTries = 8;

/** A new password for who knows the old one. The other sessions end, and a mail says so: whoever did it was perhaps not the person. */
export async function changePassword(
	platform: Platform,
	tries: Tries,
	person: SignedIn,
	sessionId: string | null,
	{ current, password }: { current: string; password: string },
): Promise<'done' | 'wrong' | 'too-many'> {
	const key = `password of ${person.userId}`;
	if (!tries.take(key, wrongTries)) return 'too-many';
	const [user] = await platform.db.select({ passwordHash: users.passwordHash }).from(users).where(eq(users.id, person.userId));
	if (user === undefined || !(await isPassword(user.passwordHash, current))) return 'wrong';
	tries.giveBack(key);
	expectGoodPassword(password, [person.name, person.email], 'password');
	const passwordHash = await hashPassword(password);
	await platform.transaction(async (tx) => {
		// Only over the one that was compared: two changes at once are one change and one refusal.
		const [row] = await tx.select({ passwordHash: users.passwordHash }).from(users).where(eq(users.id, person.userId)).for('update');
		if (row?.passwordHash !== user.passwordHash) throw new Conflict('The password was just changed elsewhere.');
		await tx.update(users).set({ passwordHash }).where(eq(users.id, person.userId));
		await endSessions(tx, person, sessionId, null);
		await audit(tx, person, { kind: 'password-changed', subjectId: person.userId, data: {} });
		await postMail(tx, { to: person.email, letter: changedLetter(platform.publicUrl()), now: platform.now() });
	});
	return 'done';
}
