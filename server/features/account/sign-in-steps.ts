import { createHash, randomInt } from 'node:crypto';
import { and, eq, gt, isNull, lt, sql } from 'drizzle-orm';
import type { Transaction } from '../../db/database.ts';
import { signInSteps, users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import { postMail } from '../../platform/post-mail.ts';
import { hashOfToken, newSecretToken } from '../../platform/secret-token.ts';
import type { Tries } from '../../platform/tries.ts';
import { takeFactorCode } from './one-time-codes.ts';
import { codeLetter } from './password-letters.ts';

const codeHoldsMs = 10 * 60_000;
const secondHoldsMs = 5 * 60_000;
/** Codes tried on one step; and, within a quarter of an hour, by one network address and for one person. */
const limits = { perStep: 5, perAddress: 40, perPerson: 10, mailsPerEmail: 3, asksPerAddress: 20 };

/** Where a sign-in stands that a code was shown for. */
export type StepOutcome = { state: 'right'; person: SignedIn; isOwnDevice: boolean } | { state: 'wrong' } | { state: 'too-many' };

/**
 * Mails a code to an address that has an account; for any other the same work, rows and answer. The code holds only together with the
 * answer's token, which stays in the browser that asked. Null where this network address asked too often.
 */
export async function askCode(platform: Platform, tries: Tries, email: string, address: string): Promise<string | null> {
	if (!tries.take(`codes from ${address}`, limits.asksPerAddress)) return null;
	const mayMail = tries.take(`codes for ${email}`, limits.mailsPerEmail);
	const now = platform.now();
	const { token, tokenHash } = newSecretToken();
	const code = String(randomInt(100_000_000)).padStart(8, '0');
	await platform.transaction(async (tx) => {
		const [user] = await tx
			.select({ id: users.id, email: users.email })
			.from(users)
			.where(eq(sql`lower(${users.email})`, email));
		const known = mayMail && platform.mail.isOn ? user : undefined;
		await sweep(tx, now);
		await tx.insert(signInSteps).values({
			id: platform.newId(),
			kind: 'mailed-code',
			userId: known?.id ?? null,
			tokenHash,
			codeHash: hashOfCode(token, code),
			isOwnDevice: false,
			triesLeft: limits.perStep,
			expiresAt: new Date(now.getTime() + codeHoldsMs),
			usedAt: null,
		});
		await postMail(tx, { to: known?.email ?? 'nobody', letter: codeLetter(code), now, isVoid: known === undefined });
		await audit(tx, { userId: null, address }, { kind: 'sign-in-code-asked', subjectId: known?.id ?? null, data: {} });
	});
	return token;
}

/** A second code is awaited of this person, in the browser that is given the token. */
export async function beginSecond(tx: Transaction, platform: Platform, userId: string, isOwnDevice: boolean): Promise<string> {
	const now = platform.now();
	const { token, tokenHash } = newSecretToken();
	await sweep(tx, now);
	await tx.insert(signInSteps).values({
		id: platform.newId(),
		kind: 'second-factor',
		userId,
		tokenHash,
		codeHash: null,
		isOwnDevice,
		triesLeft: limits.perStep,
		expiresAt: new Date(now.getTime() + secondHoldsMs),
		usedAt: null,
	});
	return token;
}

/** The mailed code, once. Wrong, used, over, of another browser, for an address without an account: one answer. */
export function takeMailedCode(
	platform: Platform,
	tries: Tries,
	{ token, code, isOwnDevice }: { token: string; code: string; isOwnDevice: boolean },
	address: string,
): Promise<StepOutcome> {
	const wanted = hashOfCode(token, code.replaceAll(/\D/g, ''));
	const isRight = async (_tx: Transaction, step: typeof signInSteps.$inferSelect) => step.codeHash === wanted;
	return takeStep(platform, tries, { token, kind: 'mailed-code', address, isOwnDevice }, isRight);
}

/** The code of an app or for recovery, after the password or the mailed code. */
export function takeSecond(
	platform: Platform,
	tries: Tries,
	{ stepToken, code }: { stepToken: string; code: string },
	address: string,
): Promise<StepOutcome> {
	return takeStep(platform, tries, { token: stepToken, kind: 'second-factor', address }, (tx, _step, person) =>
		takeFactorCode(tx, platform, person, code),
	);
}

interface Shown {
	token: string;
	kind: 'mailed-code' | 'second-factor';
	address: string;
	isOwnDevice?: boolean;
}

async function takeStep(
	platform: Platform,
	tries: Tries,
	{ token, kind, address, isOwnDevice }: Shown,
	isRight: (tx: Transaction, step: typeof signInSteps.$inferSelect, person: SignedIn) => Promise<boolean>,
): Promise<StepOutcome> {
	if (!tries.take(`code tries from ${address}`, limits.perAddress)) return { state: 'too-many' };
	const now = platform.now();
	const outcome = await platform.transaction(async (tx): Promise<StepOutcome> => {
		// One try is counted before anything is compared, so that many at once do not slip through.
		const [step] = await tx
			.update(signInSteps)
			.set({ triesLeft: sql`${signInSteps.triesLeft} - 1` })
			.where(
				and(
					eq(signInSteps.tokenHash, hashOfToken(token)),
					eq(signInSteps.kind, kind),
					isNull(signInSteps.usedAt),
					gt(signInSteps.expiresAt, now),
					gt(signInSteps.triesLeft, 0),
				),
			)
			.returning();
		const [user] = step?.userId ? await tx.select().from(users).where(eq(users.id, step.userId)) : [];
		const failed = async (): Promise<StepOutcome> => {
			const data = { way: kind };
			await audit(tx, { userId: null, address }, { kind: 'sign-in-failed', subjectId: user?.id ?? null, data });
			return { state: 'wrong' };
		};
		if (step === undefined || user === undefined) return failed();
		if (!tries.take(`codes of ${user.id}`, limits.perPerson)) return { state: 'too-many' };
		const person: SignedIn = { userId: user.id, name: user.name, email: user.email, address };
		if (!(await isRight(tx, step, person))) return failed();
		await tx.update(signInSteps).set({ usedAt: now }).where(eq(signInSteps.id, step.id));
		tries.giveBack(`codes of ${user.id}`);
		return { state: 'right', person, isOwnDevice: isOwnDevice ?? step.isOwnDevice };
	});
	if (outcome.state === 'right') tries.giveBack(`code tries from ${address}`);
	return outcome;
}

async function sweep(tx: Transaction, now: Date): Promise<void> {
	await tx.delete(signInSteps).where(lt(signInSteps.expiresAt, new Date(now.getTime() - codeHoldsMs)));
}

/** The token's 256 bits go into the hash: eight digits alone would be tried through at once by who reads the table. */
function hashOfCode(token: string, code: string): string {
	return createHash('sha256').update(`${token}:${code}`).digest('hex');
}
