import { useSyncExternalStore } from 'react';

const question = '(pointer: coarse)';

function subscribe(listener: () => void): () => void {
	const query = window.matchMedia?.(question);
	query?.addEventListener('change', listener);
	return () => query?.removeEventListener('change', listener);
}

/** True where the main pointer is a finger or a glove: targets of 48 px. */
export function useIsCoarse(): boolean {
	return useSyncExternalStore(subscribe, () => window.matchMedia?.(question).matches ?? false);
}
