import { reading } from './reading.ts';

/** How figures and times are written, with the mark and in the language that the person chose. The zone and the present moment are arguments. */

const minus = '\u2212';
/** Stands where there is no figure. */
export const noFigure = '–';

/** "+16", "−8", "0": millimetres with sign; one decimal where U is under 1 mm, e.g. "+0.4". Never "−0". */
export function signedMm(valueMm: number | null, expandedUncertaintyMm: number | null = null): string {
	if (valueMm === null || !Number.isFinite(valueMm)) return noFigure;
	const text = Math.abs(valueMm).toFixed(decimalsFor(expandedUncertaintyMm));
	if (Number(text) === 0) return marked(text);
	return (valueMm < 0 ? minus : '+') + marked(text);
}

/** "16", "0.4": a size in millimetres without sign, with as many decimals as U allows. */
export function plainMm(valueMm: number | null, expandedUncertaintyMm: number | null = null): string {
	if (valueMm === null || !Number.isFinite(valueMm)) return noFigure;
	return signedNumber(Math.abs(valueMm), decimalsFor(expandedUncertaintyMm));
}

/** U itself: "3", "0.8". */
export function uncertaintyMm(expandedUncertaintyMm: number | null): string {
	return plainMm(expandedUncertaintyMm, expandedUncertaintyMm);
}

function decimalsFor(expandedUncertaintyMm: number | null): 0 | 1 {
	return expandedUncertaintyMm !== null && expandedUncertaintyMm < 1 ? 1 : 0;
}

/** A limit in millimetres: "−10", "+10", "0", "+2.5"; whole where it is whole. */
export function limitMm(valueMm: number | null): string {
	if (valueMm === null) return noFigure;
	return signedMm(valueMm, Number.isInteger(valueMm) ? null : 0);
}

/** "−10 to +10", "up to 6" (plan or no lower side), "from −5". */
export function limitsMm(limits: readonly [number | null, number | null] | null, isPlan = false): string {
	if (limits === null) return 'no limits';
	const [lower, upper] = limits;
	if (upper !== null && (lower === null || isPlan)) return isPlan ? `up to ${limitMm(upper).replace('+', '')}` : `up to ${limitMm(upper)}`;
	if (lower !== null && upper === null) return `from ${limitMm(lower)}`;
	return lower === null ? 'no limits' : `${limitMm(lower)} to ${limitMm(upper)}`;
}

/** Metres with three decimals and a real minus: "−12.345". */
export function metres(valueM: number | null, decimals = 3): string {
	return valueM === null || !Number.isFinite(valueM) ? noFigure : signedNumber(valueM, decimals);
}

/** Any number with fixed decimals and a real minus, never "−0". */
export function signedNumber(value: number, decimals: number): string {
	const text = Math.abs(value).toFixed(decimals);
	return value < 0 && Number(text) !== 0 ? minus + marked(text) : marked(text);
}

/** A figure's text with the person's decimal mark. */
export function marked(text: string): string {
	return reading().decimalMark === '.' ? text : text.replace('.', ',');
}

/** "1 234": groups of three by a no-break space, from five digits on by habit of the trade's tables, from four here. */
export function count(value: number): string {
	return String(Math.trunc(value)).replace(/\B(?=(\d{3})+$)/g, '\u00a0');
}

/** "1 flag", "6 flags"; `many` where an s is not enough. */
export function counted(value: number, one: string, many = `${one}s`): string {
	return `${count(value)} ${value === 1 ? one : many}`;
}

/** "740 B", "12 kB", "3.4 MB", "1.2 GB": powers of ten. */
export function bytes(size: number): string {
	if (size < 1000) return `${size} B`;
	const units = ['kB', 'MB', 'GB', 'TB'];
	let value = size / 1000;
	let unit = 0;
	while (value >= 999.5 && unit < units.length - 1) {
		value /= 1000;
		unit += 1;
	}
	return `${value < 10 && unit > 0 ? marked(value.toFixed(1)) : Math.round(value)} ${units[unit]}`;
}

/** The parts of a moment in a zone. */
function partsIn(timeZone: string, at: Date): Record<string, string> {
	const { dateLanguage } = reading();
	const format = new Intl.DateTimeFormat(dateLanguage === 'en' ? 'en-GB' : dateLanguage, {
		timeZone,
		weekday: 'short',
		year: 'numeric',
		month: 'short',
		day: 'numeric',
		hour: '2-digit',
		minute: '2-digit',
		hourCycle: 'h23',
	});
	return Object.fromEntries(format.formatToParts(at).map((part) => [part.type, part.value]));
}

/** For sentences: "Fri 5 Dec 17:00" in the site's zone; with the year where it is not the year of `now`. */
export function moment(at: Date, timeZone: string, now: Date): string {
	const parts = partsIn(timeZone, at);
	const year = parts.year === partsIn(timeZone, now).year ? '' : ` ${parts.year}`;
	return `${parts.weekday} ${parts.day} ${parts.month}${year} ${parts.hour}:${parts.minute}`;
}

/** "Fri 5 Dec" in the site's zone. */
export function day(at: Date, timeZone: string): string {
	const parts = partsIn(timeZone, at);
	return `${parts.weekday} ${parts.day} ${parts.month}`;
}

/** For tables and files: "2026-12-05 17:00" in the site's zone. */
export function isoMoment(at: Date, timeZone: string): string {
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

/** A calendar date "2026-12-03" in a sentence: "3 Dec"; with the year where it is not `now`'s. */
export function calendarDay(isoDate: string, now: Date): string {
	const [year, month, dayOfMonth] = isoDate.split('-').map(Number);
	const name = partsIn('UTC', new Date(Date.UTC(year ?? 0, (month ?? 1) - 1, dayOfMonth))).month;
	return `${dayOfMonth} ${name}${year === now.getUTCFullYear() ? '' : ` ${year}`}`;
}

/** How far off: "in 21 h", "in 3 days", "2 h ago", "now". */
export function distanceInTime(at: Date, now: Date): string {
	const minutes = Math.round((at.getTime() - now.getTime()) / 60_000);
	const size = Math.abs(minutes);
	if (size < 1) return 'now';
	const text = size < 60 ? `${size} min` : size < 48 * 60 ? `${Math.round(size / 60)} h` : `${Math.round(size / 1440)} days`;
	return minutes > 0 ? `in ${text}` : `${text} ago`;
}
