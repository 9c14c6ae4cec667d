import { useSyncExternalStore } from 'react';
import type { Preferences } from '#shared/account/preferences.ts';

/** What of a person's preferences the writing of figures and times depends on. */
export type Reading = Pick<Preferences, 'decimalMark' | 'dateLanguage'>;

const listeners = new Set<() => void>();
let current: Reading = { decimalMark: '.', dateLanguage: 'en' };

/** How the person at this page reads; before anybody is known, with a point and in English. */
export function reading(): Reading {
	return current;
}

/** Takes over how somebody reads. Nothing is drawn again where it is as before. */
export function chooseReading({ decimalMark, dateLanguage }: Reading): void {
	if (current.decimalMark === decimalMark && current.dateLanguage === dateLanguage) return;
	current = { decimalMark, dateLanguage };
	for (const listener of listeners) listener();
}

function subscribe(listener: () => void): () => void {
	listeners.add(listener);
	return () => listeners.delete(listener);
}

/** What a page is keyed with, so that all its figures are written anew when the person reads otherwise. */
export function useReading(): Reading {
	return useSyncExternalStore(subscribe, reading);
}
