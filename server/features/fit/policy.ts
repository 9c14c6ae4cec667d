import type { FitKind } from '#shared/fit/fit-schema.ts';

const kindsFor: Record<'levelled' | 'free', readonly FitKind[]> = {
	levelled: ['height', 'levelled', 'levelled-scaled'],
	free: ['free', 'free-scaled'],
};

/**
 * Why a fit of this kind may not be adopted for this set-up, as a sentence; null where it may. Any kind may be made, for
 * comparison; what is adopted must be true to the instrument.
 */
export function whyNotAdoptable(kind: FitKind, setup: { levelling: 'levelled' | 'free'; bringsScale: boolean }): string | null {
	if (!kindsFor[setup.levelling].includes(kind)) {
		return setup.levelling === 'levelled'
			? 'The instrument was levelled, so a fit that tilts it may be compared but not adopted. Adopt a levelled fit, or a height fit for a level run.'
			: 'The instrument was not levelled, so a fit that keeps it plumb may be compared but not adopted. Adopt a free fit.';
	}
	if (setup.bringsScale && (kind === 'levelled-scaled' || kind === 'free-scaled')) {
		return 'The instrument brings its own scale, so a fitted one may be compared but not adopted. Look for what is behind the scale; a grid or ground factor is typed in.';
	}
	return null;
}

/** Why this person may not check this fit as the second one, with the code of the refusal; null where they may. */
export function whyNotCheckable(
	fit: { state: 'made' | 'adopted' | 'superseded'; adoptedBy: string | null },
	userId: string,
): { code: string; message: string } | null {
	if (fit.state === 'made') return { code: 'not-adopted', message: 'This fit is not adopted yet. It is adopted first, then checked.' };
	if (fit.state === 'superseded') return { code: 'superseded', message: 'A newer fit of this set-up is adopted. Check that one.' };
	if (fit.adoptedBy === userId) return { code: 'own-fit', message: 'You adopted this fit. Another site engineer checks it.' };
	return null;
}
