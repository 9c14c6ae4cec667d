import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { companies, memberships } from '../../server/db/schema/site.ts';
import { type Answer, openTwoSites, type TwoSites } from '../routes/two-sites.ts';
import { heldBy } from './held-by.ts';
import { mirrorSite } from './mirror-site.ts';

let world: TwoSites;
/** The ids of one's own site that mirror the other's, by the same names. */
let ownIds: Record<string, string>;
beforeAll(async () => {
	world = await openTwoSites();
	const { server, otherSiteId, ownSiteId, foreignIds } = world;
	const renamed = await mirrorSite(server.platform.db, otherSiteId, ownSiteId);
	ownIds = Object.fromEntries(Object.entries(foreignIds).map(([name, id]) => [name, renamed.get(id) ?? id]));
	// The contractor belongs to a company that has pours.
	const [fennick] = await server.platform.db.select({ id: companies.id }).from(companies).where(eq(companies.siteId, otherSiteId));
	const [ours] = await server.platform.db.select({ id: companies.id }).from(companies).where(eq(companies.name, 'Ours'));
	await server.platform.db
		.update(memberships)
		.set({ companyId: renamed.get(fennick?.id ?? '') ?? null })
		.where(eq(memberships.companyId, ours?.id ?? ''));
});
afterAll(() => world.server.close());

/** Who may do most on their own site; between them they may ask every route. */
const askers = ['site-engineer', 'project-engineer', 'contractor', 'owners-representative'] as const;

/** Times, and ids made in the answer itself, differ from run to run. */
const steady = ({ code, leaked, body }: Answer) =>
	JSON.stringify([code, leaked, code === 'done' ? body.replaceAll(/\d{4}-\d\d-\d\dT[\d:.]+Z/g, '') : '']);

interface Case {
	route: TwoSites['routes'][number];
	caller: (typeof askers)[number];
	input: unknown;
}

/**
 * Every route of a site, asked under one's own site: with the things of the other, with one thing of the other among one's own, and, for what
 * is only read, with one's own and with none. Reads first: what a missing filter lets be written stays.
 */
function casesOf({ routes, inputFor, ownSiteId, foreignIds }: TwoSites): Case[] {
	const ofSite = routes.filter(({ permission }) => permission !== 'public' && permission !== 'signed-in');
	const isRead = ({ permission, path }: TwoSites['routes'][number]) =>
		permission.endsWith('.see') && path !== 'site.endRole' && path !== 'pour.seeHold';
	return ofSite
		.sort((a, b) => Number(isRead(b)) - Number(isRead(a)))
		.flatMap((route) => {
			const whole = JSON.stringify(inputFor(route, ownSiteId, ownIds));
			const named = Object.keys(ownIds).filter((name) => whole.includes(ownIds[name] ?? ' '));
			const oneForeign = named.length < 2 ? [] : named.map((name) => ({ ...ownIds, [name]: foreignIds[name] ?? '' }));
			const own = isRead(route) ? [ownIds, {}] : [];
			const inputs = [...own, foreignIds, ...oneForeign].flatMap((ids) => {
				const input = inputFor(route, ownSiteId, ids);
				return input === null ? [] : [JSON.stringify(input)];
			});
			return [...new Set(inputs)].flatMap((input) => askers.map((caller) => ({ route, caller, input: JSON.parse(input) as unknown })));
		});
}

it('misses each site filter that is left out', async () => {
	const filters = globalThis.siteFilters;
	if (filters === undefined) throw new Error('The server was loaded without its filters being marked.');
	const answerTo = async ({ route, caller, input }: Case) => steady(await world.ask(route, caller, input));
	const only = process.env.FILTERS?.split(',');
	const cases = casesOf(world);
	/** The cases in which a filter is asked, with their answers while it stands. */
	const askedIn = new Map<string, Case[]>();
	const whole = new Map<Case, string>();
	for (const one of cases) {
		filters.asked.clear();
		whole.set(one, await answerTo(one));
		for (const name of filters.asked) askedIn.set(name, [...(askedIn.get(name) ?? []), one]);
	}
	const caught: string[] = [];
	const missed: string[] = [];
	for (const [name, toAsk] of askedIn) {
		if (only !== undefined && !only.some((one) => name.startsWith(one))) continue;
		let isCaught = false;
		for (const one of toAsk) {
			// Asked once more while it stands: what an earlier absence let be written is the state to compare with.
			const before = await answerTo(one);
			filters.dropped = name;
			const without = await answerTo(one);
			filters.dropped = null;
			if (without === before) continue;
			isCaught = true;
			break;
		}
		(isCaught ? caught : missed).push(name);
	}
	const unasked = filters.all.filter((name) => !askedIn.has(name));
	const open = [...missed, ...(only === undefined ? unasked : [])];
	const held = open.filter((name) => name in heldBy);
	const unproven = open.filter((name) => !(name in heldBy));
	console.log(
		`Site filters: ${filters.all.length}; asked by ${cases.length} calls ${askedIn.size}; left out and noticed ${caught.length}; held by something else, as said in held-by.ts, ${held.length}; neither ${unproven.length}`,
	);
	console.log(`Not noticed in any answer:\n  ${missed.join('\n  ')}`);
	console.log(`Never asked by these calls:\n  ${unasked.join('\n  ')}`);
	const gone = Object.keys(heldBy).filter((name) => !filters.all.includes(name));
	expect({ unproven, gone }).toEqual({ unproven: [], gone: [] });
});
