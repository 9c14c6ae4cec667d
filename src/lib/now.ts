import { useSyncExternalStore } from 'react';

const minuteMs = 60_000;

function subscribe(listener: () => void): () => void {
	const timer = setInterval(listener, minuteMs / 2);
	return () => clearInterval(timer);
}

/** The present minute; what depends on it is drawn again when it changes. */
export function useNow(): Date {
	const minute = useSyncExternalStore(subscribe, () => Math.floor(Date.now() / minuteMs));
	return new Date(minute * minuteMs);
}
