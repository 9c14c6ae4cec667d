import { eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { again } from '#shared/account/factors-contract.ts';
import { sessions, users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import { isPassword } from '../../platform/password.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import type { Tries } from '../../platform/tries.ts';
import { takeFactorCode } from './one-time-codes.ts';
import { whoShowed } from './passkeys.ts';

type Proof = z.output<typeof again>;

const wrongTries = 8;
/** So long the session counts as just opened. */
const freshMs = 10 * 60_000;

/**
 * The person of the session proves once more who they are. For ten minutes from then on `isFresh` holds in this session; a code or a
 * passkey besides counts as its second factor. Wrong proofs are counted with those of a change of password.
 */
export async function reauthenticate(
	platform: Platform,
	tries: Tries,
	person: SignedIn,
	sessionId: string,
	proof: Proof,
): Promise<Date | 'wrong' | 'too-many'> {
	const key = `password of ${person.userId}`;
	if (!tries.take(key, wrongTries)) return 'too-many';
	if (!(await isProved(platform, person, proof))) {
		const data = { way: `again, ${proof.way}` };
		await platform.transaction((tx) => audit(tx, person, { kind: 'sign-in-failed', subjectId: person.userId, data }));
		return 'wrong';
	}
	tries.giveBack(key);
	const freshUntil = new Date(platform.now().getTime() + freshMs);
	await platform.transaction(async (tx) => {
		await tx
			.update(sessions)
			.set({ freshUntil, ...(proof.way !== 'password' && { hasSecondFactor: true }) })
			.where(eq(sessions.id, sessionId));
		await audit(tx, person, { kind: 'reauthenticated', subjectId: person.userId, data: { way: proof.way } });
	});
	return freshUntil;
}

async function isProved(platform: Platform, person: SignedIn, proof: Proof): Promise<boolean> {
	if (proof.way === 'code') return platform.transaction((tx) => takeFactorCode(tx, platform, person, proof.code));
	if (proof.way === 'passkey') return (await whoShowed(platform, 'again', proof, person.userId)) !== null;
	const [user] = await platform.db.select({ passwordHash: users.passwordHash }).from(users).where(eq(users.id, person.userId));
	return isPassword(user?.passwordHash ?? null, proof.password);
}
