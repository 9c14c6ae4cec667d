import type { PourSummary } from '#shared/pour/contract.ts';
import type { HoldPointKind, HoldPointState } from '#shared/pour/pour-life.ts';

const pointWords: Record<HoldPointState, string> = {
	open: 'not called yet',
	called: 'called by the contractor',
	submitted: 'waits for the owner’s representative',
	'more-asked': 'more is asked for',
	released: 'released',
	'released-with-conditions': 'released with conditions',
	refused: 'refused',
};

/** "waits for the owner's representative". */
export function holdPointStateWords(state: HoldPointState): string {
	return pointWords[state];
}

/** "Before the pour", "As cast". */
export function holdPointName(kind: HoldPointKind): string {
	return kind === 'before-pour' ? 'Before the pour' : 'After the pour, as cast';
}

/** Which hold point is in hand: the second one once it is cast. */
export function pointInHand({ state }: Pick<PourSummary, 'state'>): HoldPointKind {
	return state === 'cast' || state === 'cast-in-part' ? 'after-pour' : 'before-pour';
}

/** One word per pour: "Hold", "Released", "Not released", "Concreting", "Cast". */
export function pourWord({ state, before, isHeld }: Pick<PourSummary, 'state' | 'before' | 'isHeld'>): string {
	if (isHeld) return 'Hold: do not pour';
	if (state === 'concreting') return 'Concreting';
	if (state === 'cast') return 'Cast';
	if (state === 'cast-in-part') return 'Cast in part';
	if (before === 'released') return 'Released';
	if (before === 'released-with-conditions') return 'Released with conditions';
	return 'Not released';
}

/** The contractor's one word: may we pour? */
export function pourAnswer(pour: Pick<PourSummary, 'state' | 'before' | 'isHeld'>): 'Not released' | 'Released' | 'Hold' | 'Cast' {
	if (pour.isHeld) return 'Hold';
	if (pour.state === 'cast' || pour.state === 'cast-in-part') return 'Cast';
	return pour.before === 'released' || pour.before === 'released-with-conditions' ? 'Released' : 'Not released';
}
