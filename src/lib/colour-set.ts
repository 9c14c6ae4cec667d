import { useSyncExternalStore } from 'react';

/** light, dark, and sun: ink on white for a screen in full daylight. */
export type ColourSet = 'light' | 'dark' | 'sun';
/** What a person asked for on this device; `device` follows the system. */
export type ColourSetWish = ColourSet | 'device';

const storageKey = 'batterboard.colour-set';
const listeners = new Set<() => void>();
let wishInMemory: ColourSetWish = 'device';

function storedWish(): ColourSetWish {
	try {
		const stored = window.localStorage.getItem(storageKey);
		return stored === 'light' || stored === 'dark' || stored === 'sun' ? stored : 'device';
	} catch {
		// A browser that keeps nothing still lets the person choose for this page.
		return wishInMemory;
	}
}

function setOf(wish: ColourSetWish): ColourSet {
	if (wish !== 'device') return wish;
	return typeof window.matchMedia === 'function' && window.matchMedia('(prefers-color-scheme: dark)').matches ? 'dark' : 'light';
}

function show(): void {
	document.documentElement.dataset.set = setOf(wishInMemory);
	for (const listener of listeners) listener();
}

/** Puts the device's set on the document before the first picture, and keeps following the system where nothing was chosen. Call once, first. */
export function startColourSet(): void {
	wishInMemory = storedWish();
	show();
	window.matchMedia?.('(prefers-color-scheme: dark)').addEventListener('change', show);
	window.addEventListener('storage', (event) => {
		if (event.key !== storageKey) return;
		wishInMemory = storedWish();
		show();
	});
}

/** Whether a set was chosen on this device. */
export function hasColourWish(): boolean {
	return storedWish() !== 'device';
}

/** Chooses a set for this device. */
export function chooseColourSet(wish: ColourSetWish): void {
	wishInMemory = wish;
	try {
		if (wish === 'device') window.localStorage.removeItem(storageKey);
		else window.localStorage.setItem(storageKey, wish);
	} catch {
		// Kept in memory only; nothing else depends on it.
	}
	show();
}

function subscribe(listener: () => void): () => void {
	listeners.add(listener);
	return () => listeners.delete(listener);
}

/** The set that is shown and the wish behind it. What draws on a canvas or in 3D depends on `set` and reads the tokens again. */
export function useColourSet(): { set: ColourSet; wish: ColourSetWish } {
	const wish = useSyncExternalStore(subscribe, () => wishInMemory);
	const set = useSyncExternalStore(subscribe, () => setOf(wishInMemory));
	return { set, wish };
}

/** A token's present value, e.g. `readToken('--color-proud')` → `#9e3c09`, for what CSS does not reach. */
export function readToken(name: `--${string}`): string {
	return getComputedStyle(document.documentElement).getPropertyValue(name).trim();
}
