import { useCallback } from 'react';
import { useSearchParams } from 'react-router-dom';

/** `push`: a step back in the browser undoes it (a filter, a tab). `replace`: it does not (a choice moved by arrows). */
export type AddressStep = 'push' | 'replace';

/**
 * A value kept in the address under `key`, so that a link shows a colleague the same. Null: not there.
 * All others in the address stay as they are.
 */
export function useAddressState(key: string, step: AddressStep = 'replace'): [string | null, (value: string | null) => void] {
	const [parameters, setParameters] = useSearchParams();
	const set = useCallback(
		(value: string | null) => {
			setParameters(
				(before) => {
					const after = new URLSearchParams(before);
					if (value === null || value === '') after.delete(key);
					else after.set(key, value);
					return after;
				},
				{ replace: step === 'replace', preventScrollReset: true },
			);
		},
		[key, step, setParameters],
	);
	return [parameters.get(key), set];
}

/** The same for a set of words, written "a,b"; `fallback` holds where the address names none, and an empty set is written "none". */
export function useAddressSet<Word extends string>(
	key: string,
	words: readonly Word[],
	fallback: readonly Word[],
	step: AddressStep = 'replace',
): [readonly Word[], (chosen: readonly Word[]) => void] {
	const [text, setText] = useAddressState(key, step);
	const chosen = text === null ? fallback : words.filter((word) => text.split(',').includes(word));
	const choose = useCallback(
		(next: readonly Word[]) => {
			const isFallback = next.length === fallback.length && next.every((word) => fallback.includes(word));
			setText(isFallback ? null : next.length === 0 ? 'none' : words.filter((word) => next.includes(word)).join(','));
		},
		[fallback, setText, words],
	);
	return [chosen, choose];
}
