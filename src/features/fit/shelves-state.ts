import { useMemo, useState } from 'react';
import type { PairUse, Relabelling, Shelf, Shelving } from '#shared/fit/contract.ts';

/** What a person chose about the pairs. */
export interface PairChoices {
	shelves: readonly Shelving[];
	relabellings: readonly Relabelling[];
}

/** Where a pair lies and with which of its axes. */
export interface PairPlace {
	shelf: Shelf;
	use: PairUse;
}

/** The shelves as a person moves them, with the way back. */
export interface Shelves extends PairChoices {
	shelvingOf: (name: string) => Shelving;
	put: (names: readonly string[], place: PairPlace, reason: string | null) => void;
	/** Two targets whose labels were exchanged. */
	exchange: (names: readonly [string, string], reason: string) => void;
	relabel: (relabellings: readonly Relabelling[]) => void;
	/** Null where there is nothing to take back. */
	takeBack: (() => void) | null;
	hasChanged: boolean;
}

/** @param start what the newest fit was made with, or nothing */
export function useShelves(start: PairChoices): Shelves {
	const [history, setHistory] = useState<readonly PairChoices[]>([start]);
	const now = history.at(-1) ?? start;
	return useMemo(() => {
		const byName = new Map(now.shelves.map((shelving) => [shelving.name, shelving]));
		const step = (next: (before: PairChoices) => PairChoices) =>
			setHistory((before) => [...before, next(before.at(-1) ?? { shelves: [], relabellings: [] })]);
		return {
			...now,
			shelvingOf: (name) => byName.get(name) ?? { name, shelf: 'in-the-fit', reason: null },
			put: (names, place, reason) => step((before) => ({ ...before, shelves: withPlace(before.shelves, names, place, reason) })),
			exchange: (names, reason) => step((before) => ({ ...before, shelves: withExchange(before.shelves, names, reason) })),
			relabel: (relabellings) => step((before) => ({ ...before, relabellings })),
			takeBack: history.length > 1 ? () => setHistory((before) => before.slice(0, -1)) : null,
			hasChanged: history.length > 1,
		};
	}, [history.length, now]);
}

/** Pairs put on a shelf, whole or in part. Put into the fit whole, an exchange of its label is taken back, on both sides. */
export function withPlace(
	shelves: readonly Shelving[],
	names: readonly string[],
	{ shelf, use }: PairPlace,
	reason: string | null,
): Shelving[] {
	const earlier = new Map(shelves.map((shelving) => [shelving.name, shelving]));
	const isPlain = shelf === 'in-the-fit' && use === 'all';
	const freed = new Set(isPlain ? names.flatMap((name) => earlier.get(name)?.exchangedWith ?? []) : []);
	const moved = new Set(names);
	const others = shelves.filter(({ name }) => !moved.has(name)).map((one) => (freed.has(one.name) ? withoutExchange(one) : one));
	const placed = names.map((name): Shelving => {
		const partner = isPlain ? null : (earlier.get(name)?.exchangedWith ?? null);
		const why = partner === null ? reason : (reason ?? earlier.get(name)?.reason ?? null);
		return { name, shelf, reason: why, ...(use === 'all' ? {} : { use }), ...(partner === null ? {} : { exchangedWith: partner }) };
	});
	return [...others, ...placed].filter(saysSomething);
}

/** Two pairs that each take the other's sighting, in the fit. */
export function withExchange(shelves: readonly Shelving[], [a, b]: readonly [string, string], reason: string): Shelving[] {
	const partners = new Set(shelves.flatMap(({ name, exchangedWith }) => (name === a || name === b ? (exchangedWith ?? []) : [])));
	const others = shelves.filter(({ name }) => name !== a && name !== b).map((one) => (partners.has(one.name) ? withoutExchange(one) : one));
	return [
		...others,
		{ name: a, shelf: 'in-the-fit' as const, reason, exchangedWith: b },
		{ name: b, shelf: 'in-the-fit' as const, reason, exchangedWith: a },
	].filter(saysSomething);
}

function withoutExchange({ exchangedWith: _, ...shelving }: Shelving): Shelving {
	return shelving.shelf === 'in-the-fit' && (shelving.use ?? 'all') === 'all' ? { ...shelving, reason: null } : shelving;
}

/** In the fit, whole and as labelled is where every pair lies that nothing is said of. */
function saysSomething({ shelf, use, exchangedWith, reason }: Shelving): boolean {
	return shelf !== 'in-the-fit' || (use ?? 'all') !== 'all' || Boolean(exchangedWith) || reason !== null;
}
