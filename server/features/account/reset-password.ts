import { and, eq, gt, isNull, lt, sql } from 'drizzle-orm';
import type { Transaction } from '../../db/database.ts';
import { passwordResets, sessions, signInSteps, users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import { hashPassword } from '../../platform/password.ts';
import type { Platform } from '../../platform/platform.ts';
import { postMail } from '../../platform/post-mail.ts';
import { NotFound } from '../../platform/refuse.ts';
import { hashOfToken, newSecretToken } from '../../platform/secret-token.ts';
import type { Tries } from '../../platform/tries.ts';
import { expectGoodPassword } from './good-password.ts';
import { changedLetter, resetLetter } from './password-letters.ts';

const holdsMs = 30 * 60_000;
const keptMs = 24 * 3_600_000;
/** Within a quarter of an hour. Past the first the mail stays away without a word; past the second the answer is TOO_MANY. */
const limits = { mailsPerEmail: 3, asksPerAddress: 20, linksPerAddress: 30 };

const doesNotHold = 'This link does not hold: it was used, a newer one was sent, or its half hour is over.';

/**
 * Mails a link where the address has an account, and does the same work where it has none: the same rows, one of them of nobody, and a
 * mail to nobody. False where this network address asked too often.
 */
export async function askReset(platform: Platform, tries: Tries, email: string, address: string): Promise<boolean> {
	if (!tries.take(`resets from ${address}`, limits.asksPerAddress)) return false;
	const mayMail = tries.take(`resets for ${email}`, limits.mailsPerEmail);
	const now = platform.now();
	const { token, tokenHash } = newSecretToken();
	await platform.transaction(async (tx) => {
		const [user] = await tx
			.select({ id: users.id, email: users.email })
			.from(users)
			.where(eq(sql`lower(${users.email})`, email));
		const known = mayMail && platform.mail.isOn ? user : undefined;
		await tx.delete(passwordResets).where(lt(passwordResets.createdAt, new Date(now.getTime() - keptMs)));
		const expiresAt = new Date(now.getTime() + holdsMs);
		// The newest link alone holds.
		if (known !== undefined) await endResetsOf(tx, known.id, now);
		else await endResetsOf(tx, platform.newId(), now);
		await tx
			.insert(passwordResets)
			.values({ id: platform.newId(), userId: known?.id ?? null, tokenHash, createdAt: now, expiresAt, usedAt: null });
		const letter = resetLetter(platform.publicUrl(), token);
		await postMail(tx, { to: known?.email ?? 'nobody', letter, now, isVoid: known === undefined });
		await audit(tx, { userId: null, address }, { kind: 'reset-asked', subjectId: known?.id ?? null, data: {} });
	});
	return true;
}

/**
 * Sets the password by the mailed link. Every session ends, this browser's too: the next sign-in asks for all that a sign-in asks for.
 * NOT_FOUND for a link that is used, replaced, over or made up. False where this network address tried too many.
 */
export async function resetPassword(
	platform: Platform,
	tries: Tries,
	{ token, password }: { token: string; password: string },
	address: string,
): Promise<boolean> {
	if (!tries.take(`reset links from ${address}`, limits.linksPerAddress)) return false;
	const tokenHash = hashOfToken(token);
	const [found] = await platform.db
		.select({ userId: users.id, name: users.name, email: users.email })
		.from(passwordResets)
		.innerJoin(users, eq(users.id, passwordResets.userId))
		.where(and(eq(passwordResets.tokenHash, tokenHash), holds(platform.now())));
	if (found === undefined) throw new NotFound(doesNotHold);
	expectGoodPassword(password, [found.name, found.email], 'password');
	const passwordHash = await hashPassword(password);
	await platform.transaction(async (tx) => {
		const now = platform.now();
		const used = await tx
			.update(passwordResets)
			.set({ usedAt: now })
			.where(and(eq(passwordResets.tokenHash, tokenHash), holds(now)))
			.returning({ id: passwordResets.id });
		if (used.length === 0) throw new NotFound(doesNotHold);
		await endResetsOf(tx, found.userId, now);
		await tx.update(users).set({ passwordHash }).where(eq(users.id, found.userId));
		await tx.delete(sessions).where(eq(sessions.userId, found.userId));
		await tx.delete(signInSteps).where(eq(signInSteps.userId, found.userId));
		await audit(tx, { ...found, address }, { kind: 'password-reset', subjectId: found.userId, data: {} });
		await postMail(tx, { to: found.email, letter: changedLetter(platform.publicUrl()), now });
	});
	return true;
}

function holds(now: Date) {
	return and(isNull(passwordResets.usedAt), gt(passwordResets.expiresAt, now));
}

async function endResetsOf(tx: Transaction, userId: string, now: Date): Promise<void> {
	await tx
		.update(passwordResets)
		.set({ usedAt: now })
		.where(and(eq(passwordResets.userId, userId), isNull(passwordResets.usedAt)));
}
