import { plainMm } from '../../tolerance/millimetre-text.ts';
import type { DerivedResult } from '../check-schema.ts';
import { beyondLimitsMm } from '../judge-deviation.ts';
import { decimalsFor, type SaidDeviation } from '../sentence.ts';

/** What a table shows a row of: a deviation of a checkpoint, or a result derived from several. */
export interface JudgedRow extends SaidDeviation {
	/** The checkpoint's id; of a derived result one of its own, which no checkpoint has. */
	readonly checkpointId: string;
	readonly elementId: string;
}

/** A derived result as a row, with the checkpoints it is made from. */
export interface DerivedRow extends JudgedRow {
	readonly words: string;
	readonly from: readonly string[];
	readonly conformity: number | null;
}

const opposite: Readonly<Record<string, string>> = { east: 'west', north: 'south' };

/** "east", or "west" where the deviation is against the axis; an axis between them by its bearing. */
function wayOf(axis: string, isAgainst: boolean): string {
	if (!isAgainst) return axis in opposite ? axis : `towards ${axis}`;
	return opposite[axis] ?? `away from ${axis}`;
}

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

/** The row's place and what is said of its figure: ["Plumb over 2.4 m", "leans 23 mm east"]. */
function saidOf({ characteristic, label, deviationMm, uncertaintyMm }: DerivedResult): { label: string; words: string } {
	const figure = `${plainMm(deviationMm, decimalsFor(uncertaintyMm))} mm`;
	const isNothing = Number.parseFloat(figure) === 0;
	const isAgainst = deviationMm < 0;
	switch (characteristic) {
		case 'plumb': {
			const [, axis, over] = /^along (.+) over (.+)$/.exec(label) ?? [null, 'its axis', ''];
			const way = wayOf(axis!, isAgainst);
			const along = axis! in opposite ? `${axis}–${opposite[axis!]}` : axis!;
			return { label: `Plumb, ${along}, over ${over}`, words: isNothing ? 'does not lean' : `leans ${figure} ${way}` };
		}
		case 'section':
			return { label: capital(label), words: isNothing ? 'as drawn' : `${figure} too ${isAgainst ? 'thin' : 'thick'}` };
		case 'flatness':
			return { label: `Flatness, ${label}`, words: figure };
		case 'flatness-best-fit':
			return { label: `Flatness, ${label}`, words: figure };
		case 'bolt-distance':
			return { label, words: isNothing ? 'as drawn' : `${figure} too ${isAgainst ? 'close together' : 'far apart'}` };
		case 'group-shift': {
			const [, group, axis] = /^(.+), shift (\w+)$/.exec(label) ?? [null, label, 'east'];
			return {
				label: `${group}, ${axis}–${opposite[axis!] ?? ''}`,
				words: isNothing ? 'not shifted' : `${figure} ${wayOf(axis!, isAgainst)}`,
			};
		}
		case 'group-turn':
			return { label, words: isNothing ? 'not turned' : `${figure} ${isAgainst ? 'clockwise' : 'anticlockwise'}` };
		case 'projection':
			return { label, words: isNothing ? 'as drawn' : `${figure} too ${isAgainst ? 'short' : 'far out'}` };
	}
}

/** A derived result as a row of a table: rod, words and verdict as a deviation has them. `index`: its place among the check's results. */
export function derivedRow(result: DerivedResult, index: number): DerivedRow {
	const { elementId, characteristic, deviationMm, uncertaintyMm, limitsMm, verdict, conformity, from } = result;
	return {
		checkpointId: `derived-${index + 1}`,
		elementId,
		characteristic,
		...saidOf(result),
		deviationMm,
		offsetMm: null,
		limitsMm,
		expandedUncertaintyMm: uncertaintyMm,
		verdict,
		beyondMm: verdict === 'outside' && limitsMm !== null ? beyondLimitsMm({ deviationMm, offsetMm: null }, limitsMm, null) : null,
		notMeasuredReason: null,
		conformity,
		from,
	};
}
