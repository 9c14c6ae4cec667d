import type { FitSummary } from '#shared/fit/contract.ts';
import type { Finding, FitKind, FitOutcome, FitRefusal } from '#shared/fit/fit-schema.ts';
import type { SetupSummary } from '#shared/survey/contract.ts';
import { counted, signedNumber } from '#src/lib/format.ts';

export const kindWords: Record<FitKind, string> = {
	height: 'height only, 1 unknown',
	levelled: 'levelled, 4 unknowns',
	'levelled-scaled': 'levelled with a scale, 5 unknowns',
	free: 'free, 6 unknowns',
	'free-scaled': 'free with a scale, 7 unknowns',
};

/** The fits a set-up may be given, the usual one first. A levelled instrument keeps Z plumb; one that brings its own scale is not given another. */
export function kindsFor({ levelling, bringsScale }: Pick<SetupSummary, 'levelling' | 'bringsScale'>): readonly [FitKind, ...FitKind[]] {
	if (levelling === 'levelled') return bringsScale ? ['levelled', 'height'] : ['levelled-scaled', 'levelled', 'height'];
	return bringsScale ? ['free'] : ['free-scaled', 'free'];
}

/** The page's headline: the consequence of the pairs as they lie. */
export function fitHeadline(
	setupName: string,
	outcome: FitOutcome | null,
	findings: readonly Finding[],
	adopted: FitSummary | null,
	hasChanged: boolean,
): string {
	if (outcome === null) return `Set-up ${setupName} has no pairs to fit`;
	if (!outcome.ok) return `Set-up ${setupName} has no fit yet: ${beginLow(outcome.refusal.message)}`;
	const { result } = outcome;
	const accusing = findings.find((finding) => finding.pairs.length > 0 && finding.code !== 'far-from-targets');
	if (accusing) return `Set-up ${setupName} does not fit yet: ${beginLow(accusing.message)}`;
	if (result.chiSquare && result.chiSquare.statistic > result.chiSquare.upper)
		return `Set-up ${setupName} misfits by more than its σ allow: σ̂₀ is ${Math.sqrt(result.varianceFactor ?? 0).toFixed(1)}`;
	const inFit = result.pairs.filter((pair) => !pair.heldBack).length;
	const agrees = `${counted(inFit, 'target')} ${inFit === 1 ? 'agrees' : 'agree'} within ${(result.rms * 1000).toFixed(1)} mm`;
	if (adopted && !hasChanged) return `Set-up ${setupName} is tied to the design: ${agrees}`;
	return `Set-up ${setupName} fits: ${agrees}`;
}

/** Who stands behind an adopted fit, in half a sentence. */
export function standingWords({ number, adoptedBy, checkedBy, isSecondAsked }: FitSummary): string {
	const checked = checkedBy
		? `checked by ${checkedBy}`
		: isSecondAsked
			? 'not checked by a second person'
			: 'this site asks no second person';
	return `fit ${number} adopted by ${adoptedBy}, ${checked}`;
}

function beginLow(sentence: string): string {
	const text = sentence.replace(/[.?!]$/, '');
	// Names of targets keep their capital: "T7 is …".
	return /^[A-Z][a-z]/.test(text) ? text.charAt(0).toLowerCase() + text.slice(1) : text;
}

export function refusalTitle({ code }: FitRefusal): string {
	if (code === 'too-few-pairs') return 'There are too few pairs in the fit';
	if (code === 'on-a-line') return 'The targets lie on a line';
	if (code === 'no-spread') return 'The targets are all in one place';
	if (code === 'no-solution') return 'No single position fits best';
	return 'These pairs cannot be fitted';
}

/** "1 m 23 mm", parameters in words: turn in degrees, shift in metres, scale in ppm from 1. */
export function turnWords(rotation: readonly (readonly number[])[]): string {
	const yaw = (Math.atan2(rotation[1]?.[0] ?? 0, rotation[0]?.[0] ?? 1) * 180) / Math.PI;
	const tilt = (Math.acos(Math.max(-1, Math.min(1, rotation[2]?.[2] ?? 1))) * 180) / Math.PI;
	return `turned ${signedNumber(yaw, 4)}°${tilt > 1e-9 ? `, tilted ${signedNumber(tilt, 4)}°` : ''}`;
}
