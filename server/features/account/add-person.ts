import type { Transaction } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import { Conflict } from '../../platform/refuse.ts';

interface NewPerson {
	email: string;
	name: string;
	/** Made before the transaction: hashing takes a tenth of a second. */
	passwordHash: string;
	address?: string;
}

/** A new account. CONFLICT where the address has one by now. */
export async function addPerson(tx: Transaction, { newId, now }: Pick<Platform, 'newId' | 'now'>, person: NewPerson): Promise<SignedIn> {
	const userId = newId();
	const { email, name, passwordHash, address } = person;
	try {
		await tx.insert(users).values({ id: userId, email, name, passwordHash, createdAt: now() });
	} catch (error) {
		if (isUniqueViolation(error, 'users_email')) throw new Conflict('This address has an account by now. Sign in with it.');
		throw error;
	}
	const added: SignedIn = { userId, name, email, ...(address !== undefined && { address }) };
	await audit(tx, added, { kind: 'person-added', subjectId: userId, data: { name } });
	return added;
}
