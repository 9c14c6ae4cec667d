import { and, eq, ne } from 'drizzle-orm';
import { checks } from '../db/schema/check.ts';
import { sites } from '../db/schema/site.ts';
import type { Platform } from '../platform/platform.ts';
import { demoSentence } from '../scripts/demo/people.ts';
import { seedDemo } from '../scripts/seed.ts';

/** Fills an empty database with the demo site. Answers what to say of it, also where it was made earlier; null where there is none. */
export async function demoOn(platform: Platform): Promise<string | null> {
	const sentence = await seedDemo(platform);
	if (sentence !== null) return sentence;
	const invented = await platform.db.select({ id: sites.id }).from(sites).where(eq(sites.isInvented, true)).limit(1);
	if (invented[0] === undefined) return null;
	// The check is the last thing that is made: without one, the start that made the site was cut short.
	const made = await platform.db
		.select({ id: checks.id })
		.from(checks)
		.where(and(eq(checks.siteId, invented[0].id), ne(checks.state, 'computing')))
		.limit(1);
	const halfMade =
		'The start that made the demo site was cut short, so it is not whole. To have it anew, stop, remove the data folder, start again.';
	return made.length > 0 ? demoSentence() : `${halfMade}\n${demoSentence()}`;
}
