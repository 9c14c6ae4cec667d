import type { PairsOfSetup, Shelving } from './contract.ts';
import type { FitInput, FitKind, FitPair } from './fit-schema.ts';

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
	const shelfOf = new Map(shelves.map((shelving) => [shelving.name, shelving.shelf]));
	const used = pairs.flatMap((pair): FitPair[] => {
		const shelf = shelfOf.get(pair.name) ?? 'in-the-fit';
		if (shelf === 'set-aside') return [];
		return [shelf === 'held-back' ? { ...pair, heldBack: true } : { ...pair, heldBack: false }];
	});
	const isScaled = kind === 'levelled-scaled' || kind === 'free-scaled';
	return { fit: kind, pairs: used, ...(knownScale !== null && !isScaled ? { knownScale } : {}) };
}
