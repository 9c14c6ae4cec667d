import type { PairsOfSetup, Shelving } from '#shared/fit/contract.ts';
import { Refused } from '../../platform/refuse.ts';

/** What has no partner was offered for a match, and targets for other labels; the fit does not rest on either. */
export function withoutLoose({ loose: _, targets: __, ...kept }: PairsOfSetup): PairsOfSetup {
	return kept;
}

/** Every shelf names a pair, once; what does not lie in the fit, whole and as labelled, says why; exchanged labels name each other. */
export function expectShelves({ pairs }: PairsOfSetup, shelves: readonly Shelving[]): void {
	const known = new Set(pairs.map(({ name }) => name));
	const partners = new Map(shelves.map(({ name, exchangedWith }) => [name, exchangedWith ?? null]));
	const seen = new Set<string>();
	for (const [index, { name, shelf, reason, use = 'all', exchangedWith = null }] of shelves.entries()) {
		const where = `shelves.${index}`;
		if (!known.has(name)) throw new Refused('no-such-pair', `“${name}” is no pair of this set-up.`, where);
		if (seen.has(name)) throw new Refused('shelved-twice', `“${name}” lies on two shelves.`, where);
		if (shelf === 'set-aside' && reason === null) throw new Refused('no-reason', `Say why “${name}” is set aside.`, where);
		if (use !== 'all' && reason === null) throw new Refused('no-reason', `Say why “${name}” is used in ${use} only.`, where);
		if (exchangedWith !== null) {
			if (reason === null) throw new Refused('no-reason', `Say why “${name}” is exchanged with “${exchangedWith}”.`, where);
			if (exchangedWith === name || partners.get(exchangedWith) !== name) {
				throw new Refused('not-mutual', `“${name}” is exchanged with “${exchangedWith}”, which does not say so.`, where);
			}
		}
		seen.add(name);
	}
}
