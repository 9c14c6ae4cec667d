import { useEffect, useState } from 'react';
import { type FitSearch, type FitSearchAnswer, runFitSearch } from './fit-search.ts';

interface SearchState<Answer> {
	/** The newest answer; while another search runs, the one before. */
	answer: Answer | null;
	/** True from the change of what is searched to its answer. */
	isSearching: boolean;
}

/**
 * Searches in a thread, so that typing and moving pairs never wait for it: a search that is overtaken is ended. Where there are no
 * threads it is done when the browser rests.
 * @param search keep it the same object while nothing changed; null: nothing to search
 */
export function useFitSearch<Task extends FitSearch['task']>(
	search: Extract<FitSearch, { task: Task }> | null,
): SearchState<Extract<FitSearchAnswer, { task: Task }>> {
	type Answer = Extract<FitSearchAnswer, { task: Task }>;
	const [found, setFound] = useState<{ for: FitSearch; answer: Answer } | null>(null);
	useEffect(() => {
		if (search === null) return;
		const take = (answer: FitSearchAnswer) => setFound({ for: search, answer: answer as Answer });
		if (typeof Worker === 'undefined') {
			const timer = setTimeout(() => take(runFitSearch(search)), 0);
			return () => clearTimeout(timer);
		}
		const worker = new Worker(new URL('./fit-search.worker.ts', import.meta.url), { type: 'module' });
		worker.onmessage = ({ data }: MessageEvent<FitSearchAnswer>) => {
			take(data);
			worker.terminate();
		};
		worker.postMessage(search);
		return () => worker.terminate();
	}, [search]);
	return { answer: search === null ? null : (found?.answer ?? null), isSearching: search !== null && found?.for !== search };
}
