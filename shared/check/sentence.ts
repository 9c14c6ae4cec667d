import { limitText, plainMm, signedLimitText } from '../tolerance/millimetre-text.ts';
import type { DerivedCharacteristic, Stage } from '../tolerance/sheet-schema.ts';
import type { Deviation, Verdict } from './check-schema.ts';
import { directionWords } from './direction-words.ts';

/** What of a deviation is said. */
export type SaidDeviation = Pick<
	Deviation,
	'label' | 'deviationMm' | 'offsetMm' | 'limitsMm' | 'expandedUncertaintyMm' | 'verdict' | 'beyondMm' | 'notMeasuredReason'
> &
	Partial<Pick<Deviation, 'boxYawRad'>> & {
		readonly characteristic: Deviation['characteristic'] | DerivedCharacteristic;
		/** How it is off, where its sign alone does not say it: "leans 23 mm east". Derived results have it. */
		readonly words?: string;
	};

export interface SentenceOptions {
	/** Before the pour a plan offset is also said the way it has yet to go: arithmetic, no instruction. */
	readonly stage?: Stage;
	/** A person's setting; a point where it is not given. */
	readonly decimalMark?: '.' | ',';
}

const words: Readonly<Record<Exclude<Verdict, 'outside'>, string>> = {
	within: 'within',
	'too-close-to-call': 'too close to call',
	undecided: 'undecided',
	'not-measured': 'not measured',
	'no-tolerance': 'no tolerance',
};

/** One decimal where U is under a millimetre, else none (DESIGN.md). */
export function decimalsFor(expandedUncertaintyMm: number | null): 0 | 1 {
	return expandedUncertaintyMm !== null && expandedUncertaintyMm < 1 ? 1 : 0;
}

/** "6", or "less than 1" where the rounding would say nothing of an excess that is there. */
function excess(beyondMm: number, decimals: 0 | 1): string {
	const figure = plainMm(beyondMm, decimals);
	if (Number(figure) !== 0) return figure;
	return `less than ${decimals === 0 ? '1' : '0.1'}`;
}

/** The verdict beside a rod: "outside, by 6", "too close to call". Millimetres. */
export function verdictWords({
	verdict,
	beyondMm,
	expandedUncertaintyMm,
}: Pick<SaidDeviation, 'verdict' | 'beyondMm' | 'expandedUncertaintyMm'>): string {
	if (verdict !== 'outside') return words[verdict];
	return beyondMm === null ? 'outside' : `outside, by ${excess(beyondMm, decimalsFor(expandedUncertaintyMm))}`;
}

/** The deviation with its sign word and unit: "16 mm proud", "8 mm low", "5 east, 2 south of its mark". */
export function deviationWords({ characteristic, deviationMm, offsetMm, expandedUncertaintyMm, words: said }: SaidDeviation): string {
	if (deviationMm === null) return 'not measured';
	if (said !== undefined) return said;
	const decimals = decimalsFor(expandedUncertaintyMm);
	if (characteristic === 'plan' && offsetMm !== null) {
		const way = directionWords(offsetMm, decimals);
		return way === 'nowhere off' ? 'on its mark' : `${way} of its mark`;
	}
	const figure = plainMm(deviationMm, decimals);
	if (characteristic === 'plan') return `${figure} mm from its mark`;
	if (Number(figure) === 0) return characteristic === 'level' ? 'at its level' : 'on the design face';
	const [plus, minus] = characteristic === 'level' ? ['high', 'low'] : ['proud', 'shy'];
	return `${figure} mm ${deviationMm < 0 ? minus : plus}`;
}

/**
 * Which side of a limit a value is on that is shown equal to it ("a value shown equal to its limit says which side it is on"): " , just over it".
 * Empty where the figures tell it themselves.
 */
function sideOfLimit({ characteristic, deviationMm, limitsMm, expandedUncertaintyMm, boxYawRad }: SaidDeviation): string {
	if (deviationMm === null || limitsMm === null || (characteristic === 'plan' && boxYawRad != null)) return '';
	const decimals = decimalsFor(expandedUncertaintyMm);
	for (const [limitMm, isUpper] of [
		[limitsMm[0], false],
		[limitsMm[1], true],
	] as const) {
		if (
			limitMm === null ||
			plainMm(deviationMm, decimals) !== plainMm(limitMm, decimals) ||
			Math.sign(deviationMm) * Math.sign(limitMm) < 0
		)
			continue;
		// A limit that is itself no round figure is printed whole and needs no word.
		if (Number(plainMm(limitMm, decimals)) !== Math.abs(limitMm)) continue;
		if (deviationMm === limitMm) return ', exactly on its limit';
		return deviationMm > limitMm === isUpper ? ', just past its limit' : ', just inside its limit';
	}
	return '';
}

function allowedWords({ characteristic, limitsMm, boxYawRad }: SaidDeviation): string | null {
	if (limitsMm === null) return null;
	const [lower, upper] = limitsMm;
	if (characteristic === 'plan' && boxYawRad == null) return upper === null ? null : `Allowed ${limitText(upper)} any way`;
	const along = characteristic === 'plan' ? ' along each axis' : '';
	if (lower !== null && upper !== null) return `Allowed ${signedLimitText(lower)} to ${signedLimitText(upper)}${along}`;
	if (upper !== null) return `Allowed up to ${signedLimitText(upper)}${along}`;
	return lower === null ? null : `Allowed down to ${signedLimitText(lower)}${along}`;
}

function verdictSentence(deviation: SaidDeviation): string {
	const text = verdictWords(deviation);
	const sentence = deviation.verdict === 'outside' && deviation.beyondMm !== null ? `${text} mm` : text;
	return sentence.charAt(0).toUpperCase() + sentence.slice(1);
}

/**
 * The sentence of a rod, the same wherever a deviation is drawn:
 * "East face, 2.8 m above its base: 16 mm proud. Allowed −10 to +10. Known to ±3. Outside, by 6 mm."
 */
export function deviationSentence(deviation: SaidDeviation, options: SentenceOptions = {}): string {
	const { label, deviationMm, offsetMm, expandedUncertaintyMm, notMeasuredReason } = deviation;
	const allowed = allowedWords(deviation);
	const parts: string[] = [];
	if (deviationMm === null) {
		parts.push(`${label}: not measured${notMeasuredReason === null ? '' : `, ${notMeasuredReason}`}`);
		if (allowed !== null) parts.push(allowed);
	} else {
		const decimals = decimalsFor(expandedUncertaintyMm);
		parts.push(`${label}: ${deviationWords(deviation)}${sideOfLimit(deviation)}`);
		if (options.stage === 'before-pour' && offsetMm !== null) {
			const toCome = directionWords([0 - offsetMm[0], 0 - offsetMm[1]], decimals);
			if (toCome !== 'nowhere off') parts.push(`To come ${toCome}`);
		}
		if (allowed !== null) parts.push(allowed);
		parts.push(
			expandedUncertaintyMm === null
				? 'How well it is known is not known'
				: `Known to ±${plainMm(Math.max(expandedUncertaintyMm, 0.05), decimals)}`,
		);
		parts.push(verdictSentence(deviation));
	}
	const text = `${parts.join('. ')}.`;
	// Figures only: "2.8" becomes "2,8"; the full stops of the sentence are followed by a blank.
	return options.decimalMark === ',' ? text.replaceAll(/(\d)\.(\d)/g, '$1,$2') : text;
}
