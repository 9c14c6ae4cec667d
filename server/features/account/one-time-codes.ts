import { createHash, randomBytes } from 'node:crypto';
import { and, eq, isNotNull, isNull, lt, sql } from 'drizzle-orm';
import { Secret, TOTP } from 'otpauth';
import type { Transaction } from '../../db/database.ts';
import { recoveryCodes, totps } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import { postMail } from '../../platform/post-mail.ts';
import { Conflict, foundOne, Refused } from '../../platform/refuse.ts';
import { factorLetter } from './password-letters.ts';

/** RFC 6238 as every app reads it: SHA-1, six digits, half a minute; one step to either side for clocks that differ. */
const periodS = 30;
const recoveryCount = 10;

type World = Pick<Platform, 'newId' | 'now' | 'publicUrl' | 'secrets'>;

function codesOf(secret: string, label: string): TOTP {
	return new TOTP({ issuer: 'Batterboard', label, algorithm: 'SHA1', digits: 6, period: periodS, secret: Secret.fromBase32(secret) });
}

/** The time step a code is of, or null where it is no code of the moment. */
function stepOf(secret: string | null, code: string, now: Date): number | null {
	if (secret === null) return null;
	const delta = codesOf(secret, '').validate({ token: code, timestamp: now.getTime(), window: 1 });
	return delta === null ? null : Math.floor(now.getTime() / 1000 / periodS) + delta;
}

/** A new secret of 160 bits, in place of one that was never confirmed. REFUSED where codes are set up already. */
export async function beginCodes(tx: Transaction, { now, secrets }: World, person: SignedIn): Promise<{ secret: string; uri: string }> {
	const secret = new Secret({ size: 20 }).base32;
	const fresh = { secret: secrets.seal(secret, person.userId), createdAt: now(), confirmedAt: null, lastStep: 0 };
	const kept = await tx
		.insert(totps)
		.values({ userId: person.userId, ...fresh })
		.onConflictDoUpdate({ target: totps.userId, set: fresh, setWhere: isNull(totps.confirmedAt) })
		.returning({ userId: totps.userId });
	if (kept.length === 0) throw new Refused('set-up-already', 'Codes of an app are set up already. Remove them first.');
	return { secret, uri: codesOf(secret, person.email).toString() };
}

/** The first right code sets them up; answers ten recovery codes, shown this once. Null where the code is wrong. */
export async function confirmCodes(tx: Transaction, world: World, person: SignedIn, code: string): Promise<string[] | null> {
	const { userId } = person;
	const [row] = await tx
		.select()
		.from(totps)
		.where(and(eq(totps.userId, userId), isNull(totps.confirmedAt)));
	if (row === undefined) throw new Refused('not-begun', 'Begin with a new secret: the one you scanned was replaced or is set up already.');
	const step = stepOf(world.secrets.open(row.secret, userId), digitsOf(code), world.now());
	if (step === null) return null;
	const confirmed = await tx
		.update(totps)
		.set({ confirmedAt: world.now(), lastStep: step })
		.where(and(eq(totps.userId, userId), eq(totps.secret, row.secret), isNull(totps.confirmedAt)))
		.returning({ userId: totps.userId });
	if (confirmed.length === 0) throw new Conflict();
	await audit(tx, person, { kind: 'codes-set-up', subjectId: userId, data: {} });
	await postMail(tx, { to: person.email, letter: factorLetter(world.publicUrl(), 'Codes of an app were set up'), now: world.now() });
	return newRecoveryCodes(tx, world, person);
}

/** No codes are asked any more; recovery codes go with them. */
export async function removeCodes(tx: Transaction, { now, publicUrl }: World, person: SignedIn): Promise<void> {
	const { userId, email } = person;
	foundOne(await tx.delete(totps).where(eq(totps.userId, userId)).returning({ userId: totps.userId }));
	await tx.delete(recoveryCodes).where(eq(recoveryCodes.userId, userId));
	await audit(tx, person, { kind: 'codes-removed', subjectId: userId, data: {} });
	await postMail(tx, { to: email, letter: factorLetter(publicUrl(), 'Codes of your app were removed'), now: now() });
}

/** Ten codes of 120 random bits in place of all earlier ones. REFUSED where no app is set up. */
export async function newRecoveryCodes(tx: Transaction, { newId }: World, person: SignedIn): Promise<string[]> {
	const { userId } = person;
	if (!(await hasCodes(tx, userId))) throw new Refused('no-codes', 'Set up an app for codes first.');
	await tx.delete(recoveryCodes).where(eq(recoveryCodes.userId, userId));
	const codes = Array.from({ length: recoveryCount }, () =>
		new Secret({ buffer: new Uint8Array(randomBytes(15)).buffer }).base32.toLowerCase(),
	);
	await tx.insert(recoveryCodes).values(codes.map((code) => ({ id: newId(), userId, codeHash: hashOf(code), usedAt: null })));
	await audit(tx, person, { kind: 'recovery-codes-made', subjectId: userId, data: { count: codes.length } });
	return codes.map((code) => code.match(/.{6}/g)?.join('-') ?? code);
}

/** Whether codes are asked of this person at sign-in. */
export async function hasCodes(db: Transaction | Platform['db'], userId: string): Promise<boolean> {
	const rows = await db
		.select({ userId: totps.userId })
		.from(totps)
		.where(and(eq(totps.userId, userId), isNotNull(totps.confirmedAt)));
	return rows.length > 0;
}

/** Uses a code up: of the app (never the same, nor an older one, again) or for recovery. False where it opens nothing. */
export async function takeFactorCode(
	tx: Transaction,
	{ now, secrets }: Pick<Platform, 'now' | 'secrets'>,
	person: SignedIn,
	code: string,
): Promise<boolean> {
	const { userId } = person;
	const digits = digitsOf(code);
	if (/^\d{6}$/.test(digits)) {
		const [row] = await tx
			.select({ secret: totps.secret })
			.from(totps)
			.where(and(eq(totps.userId, userId), isNotNull(totps.confirmedAt)));
		const step = row === undefined ? null : stepOf(secrets.open(row.secret, userId), digits, now());
		if (step === null) return false;
		const taken = await tx
			.update(totps)
			.set({ lastStep: step })
			.where(and(eq(totps.userId, userId), isNotNull(totps.confirmedAt), lt(totps.lastStep, step)))
			.returning({ userId: totps.userId });
		return taken.length > 0;
	}
	const used = await tx
		.update(recoveryCodes)
		.set({ usedAt: now() })
		.where(and(eq(recoveryCodes.userId, userId), eq(recoveryCodes.codeHash, hashOf(digits)), isNull(recoveryCodes.usedAt)))
		.returning({ id: recoveryCodes.id });
	if (used.length === 0) return false;
	const [left] = await tx
		.select({ left: sql<number>`count(*)::int` })
		.from(recoveryCodes)
		.where(and(eq(recoveryCodes.userId, userId), isNull(recoveryCodes.usedAt)));
	await audit(tx, person, { kind: 'recovery-code-used', subjectId: userId, data: { left: left?.left ?? 0 } });
	return true;
}

function digitsOf(code: string): string {
	return code.toLowerCase().replaceAll(/[^a-z0-9]/g, '');
}

function hashOf(code: string): string {
	return createHash('sha256').update(code).digest('hex');
}
