import type { FitKind } from '#shared/fit/fit-schema.ts';

/** How figures stand in a printed report: real minus, fixed decimals, and "not stated" where nothing was said. */

export const notStated = 'not stated';

export const kindSentences: Record<FitKind, string> = {
	height: 'height only: one unknown, the shift in level',
	levelled: 'levelled: four unknowns, one turn about the vertical and three shifts',
	'levelled-scaled': 'levelled with a fitted scale: five unknowns',
	free: 'free: six unknowns, three turns and three shifts',
	'free-scaled': 'free with a fitted scale: seven unknowns',
};

export const stageSentences: Record<string, string> = {
	'before-pour': 'before the pour',
	'as-cast-shored': 'as cast, shored',
	'as-cast': 'as cast, shores gone',
	later: 'later',
};

/** "-12.345" with a real minus; a dash where there is none. */
export function fixed(value: number | null | undefined, decimals: number): string {
	if (value === null || value === undefined || !Number.isFinite(value)) return '–';
	const text = Math.abs(value).toFixed(decimals);
	return value < 0 && Number(text) !== 0 ? `−${text}` : text;
}

/** Millimetres of metres, one decimal, with sign. */
export function signedMmOf(metres: number | null | undefined): string {
	if (metres === null || metres === undefined || !Number.isFinite(metres)) return '–';
	const text = fixed(metres * 1000, 1);
	return metres > 0 && Number(text) !== 0 ? `+${text}` : text;
}

export function mmOf(metres: number | null | undefined, decimals = 1): string {
	return metres === null || metres === undefined ? '–' : fixed(metres * 1000, decimals);
}

/** What was said, or that nothing was. */
export function said(text: string | null | undefined): string {
	return text === null || text === undefined || text.trim() === '' ? notStated : text;
}

/** A number with its unit, or that it was not stated. */
export function saidNumber(value: number | null | undefined, unit: string, decimals: number): string {
	return value === null || value === undefined ? notStated : `${fixed(value, decimals)} ${unit}`;
}

/** "2026-12-05 17:00" in the site's zone. */
export function momentIn(at: Date, timeZone: string): string {
	const format = new Intl.DateTimeFormat('en-CA', {
		timeZone,
		year: 'numeric',
		month: '2-digit',
		day: '2-digit',
		hour: '2-digit',
		minute: '2-digit',
		hourCycle: 'h23',
	});
	const parts = Object.fromEntries(format.formatToParts(at).map((part) => [part.type, part.value]));
	return `${parts.year}-${parts.month}-${parts.day} ${parts.hour}:${parts.minute}`;
}
