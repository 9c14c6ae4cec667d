import { eq } from 'drizzle-orm';
import { sites } from '../db/schema/site.ts';
import type { Platform } from '../platform/platform.ts';
import { demoSentence, seedDemo } from '../scripts/seed.ts';

/** Fills an empty database with the demo site. Answers what to say of it, also where it was made earlier; null where there is none. */
export async function demoOn(platform: Platform): Promise<string | null> {
	const made = await seedDemo(platform);
	if (made !== null) return made;
	const invented = await platform.db.select({ id: sites.id }).from(sites).where(eq(sites.isInvented, true)).limit(1);
	return invented.length > 0 ? demoSentence() : null;
}
