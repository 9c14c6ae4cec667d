import { pointNameKey } from '../survey/point-name.ts';
import type { Characteristic } from '../tolerance/sheet-schema.ts';

/** Feature codes in common use and words a surveyor adds to a mark, with what they say was measured. */
const characteristicByWord: Readonly<Record<string, Characteristic>> = {
	ab: 'plan',
	emb: 'plan',
	plan: 'plan',
	ffl: 'level',
	level: 'level',
	lvl: 'level',
	soffit: 'level',
	ssl: 'level',
	toc: 'level',
	top: 'level',
	tos: 'level',
	'u/s': 'level',
	us: 'level',
	face: 'face',
};

/** Codes of points that are control or stations, never as-built work. */
const controlCodes = new Set(['cp', 'bm', 'tp', 'stn', 'bs', 'chk', 'tgt']);

/** The letters in front of a running number: "EP12" → "ep". */
function letters(code: string): string {
	return code.trim().toLowerCase().replace(/\d+$/, '');
}

/** What a feature code says was measured; null where it says nothing of it. */
export function characteristicOfCode(code: string): Characteristic | null {
	return characteristicByWord[letters(code)] ?? null;
}

/** Whether a code marks a control point, a target or a station. */
export function isControlCode(code: string): boolean {
	return controlCodes.has(letters(code));
}

/** "C3-G level" → the key of "C3-G" and `level`; null where the name ends in no such word. */
export function splitCharacteristic(key: string): { markKey: string; characteristic: Characteristic } | null {
	const cut = key.lastIndexOf('-');
	if (cut <= 0) return null;
	const characteristic = characteristicByWord[key.slice(cut + 1)];
	return characteristic === undefined ? null : { markKey: pointNameKey(key.slice(0, cut)), characteristic };
}
