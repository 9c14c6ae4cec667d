import { eq } from 'drizzle-orm';
import type { Transaction } from './database.ts';
import { sites } from './schema/site.ts';

/** Until the transaction's end nobody else numbers, adopts or replaces on this site. Rows that only name the site are not held up. */
export async function lockSite(tx: Transaction, siteId: string): Promise<void> {
	await tx.select({ id: sites.id }).from(sites).where(eq(sites.id, siteId)).for('no key update');
}
