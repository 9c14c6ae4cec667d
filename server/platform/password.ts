import { randomBytes } from 'node:crypto';
import { hash, verify } from '@node-rs/argon2';

/** argon2id, m = 19456 KiB, t = 2, p = 1 (OWASP's least). Runs off the main thread. */
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

/** In the encoded form that names its own cost, so that later costs can differ. */
export function hashPassword(password: string): Promise<string> {
	return hash(password, cost);
}

/** Nobody's: an unknown address is verified against it, so that it takes as long as a known one. */
const nobodysHash = hashPassword(randomBytes(24).toString('base64'));

/** False for a wrong password and, after the same work, for a null hash. */
export async function isPassword(passwordHash: string | null, password: string): Promise<boolean> {
	const isRight = await verify(passwordHash ?? (await nobodysHash), password);
	return isRight && passwordHash !== null;
}
