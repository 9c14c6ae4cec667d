import { and, eq, like, not } from 'drizzle-orm';
import { totps } from '../../db/schema/account.ts';
import type { Platform } from '../../platform/platform.ts';

/** Seals the secrets that were kept readable before there was a box. Answers how many; nothing the second time. */
export async function sealOpenSecrets({ db, secrets }: Pick<Platform, 'db' | 'secrets'>): Promise<number> {
	const rows = await db
		.select({ userId: totps.userId, secret: totps.secret })
		.from(totps)
		.where(not(like(totps.secret, 'sealed1.%')));
	for (const { userId, secret } of rows)
		await db
			.update(totps)
			.set({ secret: secrets.seal(secret, userId) })
			.where(and(eq(totps.userId, userId), eq(totps.secret, secret)));
	return rows.length;
}
