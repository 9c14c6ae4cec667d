import type { Deviation } from '../check/check-schema.ts';
import { directionWords } from '../check/direction-words.ts';
import { elementSummary } from '../check/element-summary.ts';
import { decimalsFor } from '../check/sentence.ts';
import { plainMm } from '../tolerance/millimetre-text.ts';
import type { Stage } from '../tolerance/sheet-schema.ts';

export interface FlagPlace {
	readonly deviation: Deviation;
	readonly stage: Stage;
}

/** Which way the worst of a flag's places is off in plan: east and north, millimetres. Null where it has no way in plan. */
export function wayOff(deviation: Deviation): readonly [number, number] | null {
	const { offsetMm, direction, deviationMm } = deviation;
	if (offsetMm !== null) return offsetMm;
	if (direction === null || deviationMm === null || Math.hypot(direction[0], direction[1]) < 0.5) return null;
	return [direction[0] * deviationMm, direction[1] * deviationMm];
}

/** The measured place that is farthest from the design; null where nothing was measured. */
export function worstPlace<Place extends FlagPlace>(places: readonly Place[]): Place | null {
	const away = ({ deviation }: Place): number => Math.abs(deviation.deviationMm ?? 0);
	return places.filter(({ deviation }) => deviation.deviationMm !== null).toSorted((a, b) => away(b) - away(a))[0] ?? null;
}

/**
 * The flag's figure in words: before the pour how far it has yet to go ("Top to come 23 west"), after it how far off it is ("Top 23 east").
 * Arithmetic, no instruction. Null where nothing was measured, or it rounds to nothing.
 */
export function figureWords(places: readonly FlagPlace[]): string | null {
	const worst = worstPlace(places);
	if (worst === null) return null;
	const { deviation, stage } = worst;
	const isToCome = stage === 'before-pour' && deviation.verdict !== 'within';
	const way = wayWords(deviation, isToCome ? -1 : 1);
	if (way === null) return null;
	const where = whereWord(deviation, places);
	const words = isToCome ? `${where} to come ${way}` : `${where} ${way}`;
	const trimmed = words.trim();
	return trimmed.charAt(0).toUpperCase() + trimmed.slice(1);
}

/** What is off, of which element: "C/3, ground, leans east"; where the places say nothing together, the kind alone. */
export function flagHeadline(title: string, kindTitle: string, places: readonly FlagPlace[]): string {
	const phrase = elementSummary(places.map(({ deviation }) => deviation));
	// The figure stands beside it, large.
	const said = phrase === null ? null : phrase.split(/[,;]/)[0];
	return said === null || said === undefined || /\d/.test(said) ? kindTitle : `${title}, ${said}`;
}

function wayWords(deviation: Deviation, sign: 1 | -1): string | null {
	const { deviationMm, expandedUncertaintyMm, characteristic } = deviation;
	if (deviationMm === null) return null;
	const decimals = decimalsFor(expandedUncertaintyMm);
	const way = wayOff(deviation);
	if (way !== null) {
		const words = directionWords([way[0] * sign, way[1] * sign], decimals);
		return words === 'nowhere off' ? null : words;
	}
	const figure = plainMm(deviationMm, decimals);
	if (Number(figure) === 0) return null;
	if (characteristic === 'level' && sign === -1) return `${figure} ${deviationMm > 0 ? 'down' : 'up'}`;
	const [plus, minus] = characteristic === 'level' ? ['high', 'low'] : ['proud', 'shy'];
	return `${figure} ${deviationMm < 0 ? minus : plus}`;
}

/** "Top" or "foot" where the flag's places stand apart in height and the worst is at an end. */
function whereWord({ place, characteristic }: Deviation, places: readonly FlagPlace[]): string {
	if (characteristic !== 'face') return '';
	const heights = places.map(({ deviation }) => deviation.place[2]);
	const [low, high] = [Math.min(...heights), Math.max(...heights)];
	if (high - low < 0.5) return '';
	if (place[2] > high - (high - low) / 3) return 'top';
	return place[2] < low + (high - low) / 3 ? 'foot' : '';
}
