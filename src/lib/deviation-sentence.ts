import type { Deviation } from '#shared/check/check-schema.ts';
import { limitsMm, plainMm, uncertaintyMm } from './format.ts';

/** What of a deviation is said. */
export type SaidDeviation = Pick<
	Deviation,
	| 'label'
	| 'characteristic'
	| 'deviationMm'
	| 'offsetMm'
	| 'limitsMm'
	| 'expandedUncertaintyMm'
	| 'verdict'
	| 'beyondMm'
	| 'notMeasuredReason'
>;

/**
 * The sentence of a rod, the same wherever a deviation is drawn:
 * "East face, 2.8 m above its base: 16 mm proud. Allowed −10 to +10. Known to ±3. Outside, by 6 mm."
 */
export function deviationSentence(deviation: SaidDeviation): string {
	const { label, limitsMm: limits, expandedUncertaintyMm, characteristic } = deviation;
	const parts = [`${label}: ${deviationWords(deviation)}.`];
	if (limits !== null) parts.push(`Allowed ${limitsMm(limits, characteristic === 'plan')}.`);
	if (deviation.deviationMm !== null) {
		parts.push(
			expandedUncertaintyMm === null ? 'How well it is known is not known.' : `Known to ±${uncertaintyMm(expandedUncertaintyMm)}.`,
		);
	}
	parts.push(`${capital(verdictSaid(deviation, true))}.`);
	return parts.join(' ');
}

/** The deviation with its sign word and unit: "16 mm proud", "8 mm low", "5 east, 2 south of its mark", "not measured, hidden by formwork". */
export function deviationWords({ characteristic, deviationMm, offsetMm, expandedUncertaintyMm, notMeasuredReason }: SaidDeviation): string {
	if (deviationMm === null) return notMeasuredReason ? `not measured, ${notMeasuredReason}` : 'not measured';
	const size = plainMm(deviationMm, expandedUncertaintyMm);
	if (characteristic === 'plan') return offsetMm === null ? `${size} mm from its mark` : offsetWords(offsetMm, expandedUncertaintyMm);
	if (Number(size) === 0) return 'on its design';
	const isPlus = deviationMm > 0;
	return `${size} mm ${characteristic === 'level' ? (isPlus ? 'high' : 'low') : isPlus ? 'proud' : 'shy'}`;
}

/** "5 east, 2 south of its mark": plan east and north, millimetres. */
export function offsetWords(offsetMm: readonly [number, number], expandedUncertaintyMm: number | null): string {
	const [east, north] = offsetMm;
	const parts = [
		{ size: plainMm(east, expandedUncertaintyMm), word: east > 0 ? 'east' : 'west' },
		{ size: plainMm(north, expandedUncertaintyMm), word: north > 0 ? 'north' : 'south' },
	].filter((part) => Number(part.size) !== 0);
	if (parts.length === 0) return 'on its mark';
	return `${parts.map((part) => `${part.size} ${part.word}`).join(', ')} of its mark, mm`;
}

/** The verdict beside a rod: "outside, by 6", "too close to call"; with the unit in a sentence. */
export function verdictSaid(
	{ verdict, beyondMm, expandedUncertaintyMm }: Pick<SaidDeviation, 'verdict' | 'beyondMm' | 'expandedUncertaintyMm'>,
	isSentence = false,
): string {
	if (verdict === 'outside')
		return beyondMm === null ? 'outside' : `outside, by ${plainMm(beyondMm, expandedUncertaintyMm)}${isSentence ? ' mm' : ''}`;
	return verdict.replaceAll('-', ' ');
}

function capital(text: string): string {
	return text.charAt(0).toUpperCase() + text.slice(1);
}
