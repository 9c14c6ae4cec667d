import { and, isNull, ne } from 'drizzle-orm';
import type { Db } from '../db/database.ts';
import { signingKeys } from '../db/schema/record.ts';
import type { SigningKey } from './signing-keys.ts';

/** Puts the public halves where everybody can read them, and marks all but the one in use as retired. None is ever taken away. */
export async function publishKeys(db: Db, { current, all }: { current: SigningKey; all: readonly SigningKey[] }, now: Date): Promise<void> {
	const rows = all.map(({ sha256, publicKeyPem }) => ({ sha256, publicKeyPem, publishedAt: now, retiredAt: null }));
	await db.insert(signingKeys).values(rows).onConflictDoNothing();
	await db
		.update(signingKeys)
		.set({ retiredAt: now })
		.where(and(ne(signingKeys.sha256, current.sha256), isNull(signingKeys.retiredAt)));
}
