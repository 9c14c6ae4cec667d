import { useCallback, useEffect, useRef, useState } from 'react';
import { useSearchParams } from 'react-router-dom';

/** `push`: a step back in the browser undoes it (a filter, a tab). `replace`: it does not (a choice moved by arrows). */
export type AddressStep = 'push' | 'replace';

/** Browsers refuse an address that changes too often (about 200 times in half a minute): quick steps are written once they rest. */
const restMs = 150;

/** Written and not yet seen in the address: the router gives two writers in one moment the same state before, and the second would undo the first. */
const unseen = new Map<string, string | null>();

function withUnseen(before: URLSearchParams): URLSearchParams {
	const after = new URLSearchParams(before);
	for (const [key, value] of unseen) {
		if (value === null) after.delete(key);
		else after.set(key, value);
	}
	return after;
}

/**
 * A value kept in the address under `key`, so that a link shows a colleague the same. Null: not there.
 * All others in the address stay as they are. A replaced value holds at once and is written when it rests; a pushed one is written at once.
 */
export function useAddressState(key: string, step: AddressStep = 'replace'): [string | null, (value: string | null) => void] {
	const [parameters, setParameters] = useSearchParams();
	const written = parameters.get(key);
	const [held, hold] = useState<{ value: string | null; over: string | null } | null>(null);
	// What is held counts until the address changes under it: by our own writing, or by going back.
	if (held !== null && held.over !== written) hold(null);

	const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined);
	const newest = useRef({ setParameters, written });
	useEffect(() => {
		newest.current = { setParameters, written };
		if (unseen.get(key) === written) unseen.delete(key);
	});
	useEffect(
		() => () => {
			clearTimeout(timer.current);
			unseen.delete(key);
		},
		[key],
	);

	const set = useCallback(
		(given: string | null) => {
			const value = given === '' ? null : given;
			const put = () => {
				if (value === newest.current.written && !unseen.has(key)) return;
				unseen.set(key, value);
				newest.current.setParameters(withUnseen, { replace: step === 'replace', preventScrollReset: true });
			};
			clearTimeout(timer.current);
			if (step === 'push') return put();
			hold({ value, over: newest.current.written });
			timer.current = setTimeout(put, restMs);
		},
		[key, step],
	);
	return [held !== null && held.over === written ? held.value : written, set];
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
