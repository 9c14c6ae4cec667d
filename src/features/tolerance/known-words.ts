import { useQueries, useQuery } from '@tanstack/react-query';
import { api } from '#src/lib/api.ts';
import { useSite } from '#src/lib/session.ts';
import type { KnownWords } from './rule-fields.tsx';

/** The words of the newest revisions' elements, for a rule to name; empty until they are read. */
export function useKnownWords(siteId: string): KnownWords {
	const { buildings } = useSite();
	const { data: models = [] } = useQuery(api.model.list.queryOptions({ input: { siteId } }));
	const newest = models.flatMap(({ revisions }) => revisions.find(({ state }) => state === 'ready') ?? []);
	const read = useQueries({
		queries: newest.map(({ revisionId }) => api.model.elements.queryOptions({ input: { siteId, revisionId } })),
	});
	const elements = read.flatMap(({ data }) => data ?? []);
	const words = (named: readonly string[]): string[] => [...new Set(named.filter((word) => word !== ''))].sort();
	return {
		classes: words(elements.map((element) => element.class)),
		storeys: words(elements.map(({ storey }) => storey)),
		marks: words(elements.map(({ mark }) => mark)),
		tags: words(elements.map(({ tag }) => tag)),
		buildings: words(buildings.map(({ name }) => name)),
	};
}
