import { useMemo, useState } from 'react';
import type { Shelf, Shelving } from '#shared/fit/contract.ts';

/** The shelves as a person moves them, with the way back. */
export interface Shelves {
	shelves: readonly Shelving[];
	shelfOf: (name: string) => Shelf;
	reasonOf: (name: string) => string | null;
	move: (names: readonly string[], shelf: Shelf, reason: string | null) => void;
	/** Null where there is nothing to take back. */
	takeBack: (() => void) | null;
	hasChanged: boolean;
}

/** @param start the shelves of the newest fit, or none */
export function useShelves(start: readonly Shelving[]): Shelves {
	const [history, setHistory] = useState<readonly (readonly Shelving[])[]>([start]);
	const shelves = history.at(-1) ?? start;
	return useMemo(() => {
		const byName = new Map(shelves.map((shelving) => [shelving.name, shelving]));
		return {
			shelves,
			shelfOf: (name) => byName.get(name)?.shelf ?? 'in-the-fit',
			reasonOf: (name) => byName.get(name)?.reason ?? null,
			move: (names, shelf, reason) =>
				setHistory((before) => {
					const moved = new Set(names);
					const others = (before.at(-1) ?? []).filter((shelving) => !moved.has(shelving.name));
					return [...before, [...others, ...names.map((name) => ({ name, shelf, reason }))]];
				}),
			takeBack: history.length > 1 ? () => setHistory((before) => before.slice(0, -1)) : null,
			hasChanged: history.length > 1,
		};
	}, [history, shelves]);
}
