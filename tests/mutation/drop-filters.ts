import type { Plugin } from 'vite';

/** Which filter is left out at the moment, and which were asked since the last look: shared by the rewritten code and the run. */
export interface DroppedFilters {
	dropped: string | null;
	asked: Set<string>;
	all: string[];
}

declare global {
	var siteFilters: DroppedFilters | undefined;
}

const filter = /\beq\((\w+)\.siteId, (?:[^()]|\([^()]*\))*?\)(?=[,)\s;.])/g;

/**
 * Rewrites the server as it is loaded: each `eq(table.siteId, …)` can be left out at run time by its name, file and number. Drizzle passes
 * over an absent condition, so the query is the same without its filter.
 */
export function dropFilters(): Plugin {
	return {
		name: 'drop-site-filters',
		enforce: 'pre',
		transform(source, id) {
			const file = /\/(server\/(?:features|platform|workflows)\/.+\.ts)$/.exec(id.split('?')[0] ?? '')?.[1];
			if (file === undefined || !filter.test(source)) return null;
			filter.lastIndex = 0;
			let number = 0;
			const names: string[] = [];
			const code = source.replace(filter, (text) => {
				number += 1;
				const name = `${file}#${number}`;
				names.push(name);
				return `((globalThis.siteFilters?.asked.add(${JSON.stringify(name)}), globalThis.siteFilters?.dropped === ${JSON.stringify(name)}) ? undefined : ${text})`;
			});
			const note = `globalThis.siteFilters ??= { dropped: null, asked: new Set(), all: [] };globalThis.siteFilters.all.push(...${JSON.stringify(names)});`;
			return { code: `${code}\n${note}`, map: null };
		},
	};
}
