import { eq } from 'drizzle-orm';
import { defaultPreferences, type Preferences, preferences } from '#shared/account/preferences.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { audit } from '../../platform/audit.ts';
import type { SignedIn } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';

/** What the person chose, and the common choice for the rest. */
export async function preferencesOf(db: Handle, userId: string): Promise<Preferences> {
	const { kept } = foundOne(await db.select({ kept: users.preferences }).from(users).where(eq(users.id, userId)));
	return preferences.parse({ ...defaultPreferences, ...kept });
}

/** Keeps them, whole. */
export async function savePreferences(tx: Transaction, person: SignedIn, wanted: Preferences): Promise<Preferences> {
	const before = await preferencesOf(tx, person.userId);
	await tx.update(users).set({ preferences: wanted }).where(eq(users.id, person.userId));
	await audit(tx, person, { kind: 'preferences-changed', subjectId: person.userId, data: { before, after: wanted } });
	return wanted;
}
