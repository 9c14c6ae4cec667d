import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { callers, guessedId, openTwoSites, type TwoSites } from './two-sites.ts';

let world: TwoSites;
beforeAll(async () => {
	world = await openTwoSites();
}, 240_000);
afterAll(() => world.server.close());

const isOfSite = ({ permission }: { permission: string }) => permission !== 'public' && permission !== 'signed-in';

describe('what is another site’s', () => {
	it('is nobody’s who is not on it: every route, every caller, by its own id, a guessed one, and its things under one’s own site', async () => {
		const { routes, ask, inputFor, ownSiteId, otherSiteId, foreignIds } = world;
		const leaks: string[] = [];
		const unsaid: string[] = [];
		let cases = 0;
		for (const route of routes.filter(isOfSite)) {
			const inputs = {
				other: inputFor(route, otherSiteId, foreignIds),
				guessed: inputFor(route, guessedId(), foreignIds),
				own: inputFor(route, ownSiteId, foreignIds),
			};
			if (inputs.own === null) unsaid.push(route.path);
			for (const caller of callers) {
				const away = await ask(route, caller, inputs.other ?? { siteId: otherSiteId });
				const nowhere = await ask(route, caller, inputs.guessed ?? { siteId: guessedId() });
				cases += 2;
				const expected = caller === 'signed-out' ? 'UNAUTHORIZED' : 'NOT_FOUND';
				if (away.code !== expected || away.leaked.length > 0) leaks.push(`${route.path} by ${caller} on the other site: ${away.code}`);
				// Not there and not yours: one status, one body.
				if (away.body !== nowhere.body || away.status !== nowhere.status)
					leaks.push(`${route.path} by ${caller}: tells the other site from none`);
				if (inputs.own === null) continue;
				const mixed = await ask(route, caller, inputs.own);
				cases += 1;
				const hasForeignId = JSON.stringify(inputs.own) !== JSON.stringify(inputFor(route, ownSiteId, {}));
				if (mixed.leaked.length > 0 || mixed.code === 'stream')
					leaks.push(`${route.path} by ${caller} under their own site: ${mixed.leaked[0]}`);
				if (mixed.code === 'INTERNAL_SERVER_ERROR' || mixed.code === 'no code') leaks.push(`${route.path} by ${caller}: ${mixed.code}`);
				// A list narrowed to a foreign thing is empty; the record's answers hold a list within.
				const isEmpty = mixed.body === '{"json":[]}' || route.path.startsWith('record.');
				if (hasForeignId && mixed.code === 'done' && !isEmpty) leaks.push(`${route.path} by ${caller}: took a foreign id`);
			}
		}
		console.log(
			`route matrix: ${cases} cases over ${routes.filter(isOfSite).length} routes and ${callers.length} callers, leaks ${leaks.length}`,
		);
		expect(unsaid, 'routes for which no whole input was found').toEqual([]);
		expect(leaks).toEqual([]);
		expect(cases).toBeGreaterThan(1000);
	}, 300_000);
});
