import { minutesOf, type WorkingCalendar } from './site-settings.ts';

/**
 * Deadlines in a site's own working time. Days and hours are those of the wall clock in the site's zone; what elapses within a working day
 * is real time, so that a day on which the clocks change is an hour shorter or longer. Pure: the zone's rules come from Intl.
 */

const minuteMs = 60_000;
const dayMs = 86_400_000;

/** A calendar date as the UTC midnight that bears it; only its date is meant. */
type WallDay = number;

const formats = new Map<string, Intl.DateTimeFormat>();

function formatOf(timeZone: string): Intl.DateTimeFormat {
	const known = formats.get(timeZone);
	if (known !== undefined) return known;
	const made = new Intl.DateTimeFormat('en-US', {
		timeZone,
		hourCycle: 'h23',
		year: 'numeric',
		month: 'numeric',
		day: 'numeric',
		hour: 'numeric',
		minute: 'numeric',
		second: 'numeric',
	});
	formats.set(timeZone, made);
	return made;
}

/** What the zone's wall clock shows at an instant, written as if it were UTC, ms. Whole seconds. */
function wallMs(instantMs: number, timeZone: string): number {
	const parts = Object.fromEntries(
		formatOf(timeZone)
			.formatToParts(instantMs)
			.map(({ type, value }) => [type, Number(value)]),
	);
	const { year = 0, month = 1, day = 1, hour = 0, minute = 0, second = 0 } = parts;
	return Date.UTC(year, month - 1, day, hour, minute, second);
}

function offsetMs(instantMs: number, timeZone: string): number {
	const whole = Math.floor(instantMs / 1000) * 1000;
	return wallMs(whole, timeZone) - whole;
}

/** The instant at which the wall clock shows this. Shown twice: the first; never shown, as the clocks go forward: as much later as they jump. */
function instantOf(wall: number, timeZone: string): number {
	const before = offsetMs(wall - dayMs, timeZone);
	const after = offsetMs(wall + dayMs, timeZone);
	const shown = [wall - before, wall - after].filter((instant) => wall - instant === offsetMs(instant, timeZone));
	return shown.length > 0 ? Math.min(...shown) : wall - before;
}

function wallDayOf(instantMs: number, timeZone: string): WallDay {
	return Math.floor(wallMs(instantMs, timeZone) / dayMs) * dayMs;
}

function isWorkingDay(day: WallDay, { workingDays, holidays }: WorkingCalendar): boolean {
	const isoWeekday = new Date(day).getUTCDay() || 7;
	return workingDays.includes(isoWeekday) && !holidays.includes(new Date(day).toISOString().slice(0, 10));
}

/** The first working day on or after this one. A calendar has at least one working day a week and finitely many holidays, so there is one. */
function workingDayFrom(day: WallDay, calendar: WorkingCalendar): WallDay {
	let next = day;
	while (!isWorkingDay(next, calendar)) next += dayMs;
	return next;
}

/** Begin and end of a day's work, as instants. */
function hoursOn(day: WallDay, { startsAt, endsAt }: WorkingCalendar, timeZone: string): { from: number; to: number } {
	return {
		from: instantOf(day + minutesOf(startsAt) * minuteMs, timeZone),
		to: instantOf(day + minutesOf(endsAt) * minuteMs, timeZone),
	};
}

/** True within working hours, their end not included. */
export function isWorkingTime(at: Date, calendar: WorkingCalendar, timeZone: string): boolean {
	const day = wallDayOf(at.getTime(), timeZone);
	const { from, to } = hoursOn(day, calendar, timeZone);
	return isWorkingDay(day, calendar) && at.getTime() >= from && at.getTime() < to;
}

/** The instant itself within working hours, else the next beginning of work. */
export function nextWorkingTime(at: Date, calendar: WorkingCalendar, timeZone: string): Date {
	const today = wallDayOf(at.getTime(), timeZone);
	for (let day = workingDayFrom(today, calendar); ; day = workingDayFrom(day + dayMs, calendar)) {
		const { from, to } = hoursOn(day, calendar, timeZone);
		if (at.getTime() < to) return new Date(Math.max(at.getTime(), from));
	}
}

/** The next beginning of a day's work strictly after the instant. */
export function beginOfWorkAfter(at: Date, calendar: WorkingCalendar, timeZone: string): Date {
	const today = wallDayOf(at.getTime(), timeZone);
	for (let day = workingDayFrom(today, calendar); ; day = workingDayFrom(day + dayMs, calendar)) {
		const { from } = hoursOn(day, calendar, timeZone);
		if (from > at.getTime()) return new Date(from);
	}
}

/**
 * The instant by which so many working hours have gone by; a fraction counts. What ends with the day's work ends that evening, not the next
 * morning. Throws a RangeError beyond 0 to 10 000 hours.
 */
export function addWorkingHours(at: Date, hours: number, calendar: WorkingCalendar, timeZone: string): Date {
	if (!(hours >= 0 && hours <= 10_000)) throw new RangeError('Working hours to add lie between 0 and 10 000.');
	const begin = nextWorkingTime(at, calendar, timeZone).getTime();
	let leftMs = hours * 3_600_000;
	for (let day = wallDayOf(begin, timeZone); ; day = workingDayFrom(day + dayMs, calendar)) {
		const { from, to } = hoursOn(day, calendar, timeZone);
		const start = Math.max(from, begin);
		if (start + leftMs <= to) return new Date(start + leftMs);
		leftMs -= Math.max(0, to - start);
	}
}

/**
 * The same time of day so many working days later; outside of working hours it counts from the next beginning of work. Throws a RangeError
 * beyond 0 to 1000 whole days.
 */
export function addWorkingDays(at: Date, days: number, calendar: WorkingCalendar, timeZone: string): Date {
	if (!(Number.isInteger(days) && days >= 0 && days <= 1000)) throw new RangeError('Working days to add are a whole number, 0 to 1000.');
	const begin = nextWorkingTime(at, calendar, timeZone).getTime();
	if (days === 0) return new Date(begin);
	const wall = wallMs(Math.floor(begin / 1000) * 1000, timeZone) + (((begin % 1000) + 1000) % 1000);
	const firstDay = Math.floor(wall / dayMs) * dayMs;
	let day = firstDay;
	for (let n = 0; n < days; n += 1) day = workingDayFrom(day + dayMs, calendar);
	return new Date(instantOf(day + (wall - firstDay), timeZone));
}

/** Working hours between two instants; 0 where the second is not after the first. */
export function workingHoursBetween(from: Date, to: Date, calendar: WorkingCalendar, timeZone: string): number {
	let sumMs = 0;
	const last = to.getTime();
	for (let day = workingDayFrom(wallDayOf(from.getTime(), timeZone), calendar); ; day = workingDayFrom(day + dayMs, calendar)) {
		const hours = hoursOn(day, calendar, timeZone);
		if (hours.from >= last) return sumMs / 3_600_000;
		sumMs += Math.max(0, Math.min(hours.to, last) - Math.max(hours.from, from.getTime()));
	}
}
