import type { PairsOfSetup, PairUse, Shelf, Shelving } from './contract.ts';
import type { FitInput, FitKind, FitPair } from './fit-schema.ts';
import { isLevelled } from './least-pairs.ts';

/** A pair as its shelving makes it: labels put back, the axes left out that are not to be used. */
export interface CuredPair {
	pair: FitPair;
	shelf: Shelf;
	use: PairUse;
	/** It should be in the fit or held back, but this kind of fit cannot use it in part. */
	isLeftOut: boolean;
}

/**
 * Every pair with its cures: of two whose labels were exchanged each takes the other's sighting; used in plan or in level only, the other
 * axes' control is not known. A free fit needs every pair whole and a height fit its level, so what is not is left out there.
 *
 * Units and frames are those of the pairs: metres, survey frame against design frame.
 */
export function curedPairs(pairs: PairsOfSetup['pairs'], kind: FitKind, shelves: readonly Shelving[]): CuredPair[] {
	const shelvings = new Map(shelves.map((shelving) => [shelving.name, shelving]));
	const byName = new Map(pairs.map((pair) => [pair.name, pair]));
	return pairs.map((pair) => {
		const shelving = shelvings.get(pair.name);
		const partner = exchangePartner(shelving, shelvings);
		const sighted = partner === null ? pair : takeSighting(pair, byName.get(partner));
		const use = shelving?.use ?? 'all';
		const cured = use === 'all' ? sighted : { ...sighted, control: partOf(sighted.control, use) };
		return { pair: cured, shelf: shelving?.shelf ?? 'in-the-fit', use, isLeftOut: use !== 'all' && !canUse(cured, kind) };
	});
}

/**
 * The engine's input for a set-up's pairs as they lie on their shelves: set aside ones are left out, held back ones are marked,
 * all others are in the fit. Browser and server build it here, so that what is stored is what was seen.
 *
 * Units and frames are those of the pairs: metres, survey frame against design frame.
 * @param knownScale a grid/ground factor for the plan, null for 1; left out of scaled fits, which find their own
 * @param shelves pairs not named here are in the fit; a name that no pair has is passed over
 */
export function shelvedInput(
	pairs: PairsOfSetup['pairs'],
	kind: FitKind,
	knownScale: number | null,
	shelves: readonly Shelving[],
): FitInput {
	const used = curedPairs(pairs, kind, shelves).flatMap(({ pair, shelf, isLeftOut }): FitPair[] =>
		shelf === 'set-aside' || isLeftOut ? [] : [{ ...pair, heldBack: shelf === 'held-back' }],
	);
	const isScaled = kind === 'levelled-scaled' || kind === 'free-scaled';
	return { fit: kind, pairs: used, ...(knownScale !== null && !isScaled ? { knownScale } : {}) };
}

/** Whether pairs may be used in plan only or in level only by this kind of fit. */
export function takesParts(kind: FitKind): boolean {
	return isLevelled(kind);
}

/** Both must name each other: one that names a pair which does not answer keeps its own sighting. */
function exchangePartner(shelving: Shelving | undefined, shelvings: ReadonlyMap<string, Shelving>): string | null {
	const partner = shelving?.exchangedWith;
	return partner && shelvings.get(partner)?.exchangedWith === shelving.name ? partner : null;
}

function takeSighting(pair: FitPair, from: FitPair | undefined): FitPair {
	if (!from) return pair;
	return { ...pair, survey: from.survey, ...(from.surveySigma ? { surveySigma: from.surveySigma } : {}) };
}

function partOf([east, north, height]: FitPair['control'], use: 'plan' | 'level'): FitPair['control'] {
	return use === 'plan' ? [east, north, null] : [null, null, height];
}

function canUse({ control }: FitPair, kind: FitKind): boolean {
	if (kind === 'height') return control[2] !== null;
	return isLevelled(kind) && control.some((value) => value !== null);
}
