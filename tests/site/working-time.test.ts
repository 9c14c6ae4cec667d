import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { defaultCalendar, minutesOf, type WorkingCalendar } from '#shared/site/site-settings.ts';
import {
	addWorkingDays,
	addWorkingHours,
	beginOfWorkAfter,
	isWorkingTime,
	nextWorkingTime,
	workingHoursBetween,
} from '#shared/site/working-time.ts';

const zurich = 'Europe/Zurich';
const at = (iso: string) => new Date(iso);
const iso = (date: Date) => date.toISOString();

describe('working time', () => {
	it('jumps the night, the weekend and holidays', () => {
		// Friday 4 December 2026, 16:00 in Zurich is 15:00Z.
		expect(iso(addWorkingHours(at('2026-12-04T15:00:00Z'), 2, defaultCalendar, zurich))).toBe('2026-12-07T07:00:00.000Z');
		expect(iso(addWorkingHours(at('2026-12-04T15:00:00Z'), 1, defaultCalendar, zurich))).toBe('2026-12-04T16:00:00.000Z');
		const calendar = { ...defaultCalendar, holidays: ['2026-12-25', '2026-12-28'] };
		expect(iso(addWorkingDays(at('2026-12-24T09:15:00Z'), 1, calendar, zurich))).toBe('2026-12-29T09:15:00.000Z');
		expect(iso(nextWorkingTime(at('2026-12-24T20:00:00Z'), calendar, zurich))).toBe('2026-12-29T06:00:00.000Z');
	});

	it('keeps the wall clock over a change of clocks, and counts real hours within such a day', () => {
		// Clocks go forward on Sunday 28 March 2027: 10:00 on Friday is 09:00Z, on Monday 08:00Z.
		expect(iso(addWorkingDays(at('2027-03-26T09:00:00Z'), 1, defaultCalendar, zurich))).toBe('2027-03-29T08:00:00.000Z');
		const sundays: WorkingCalendar = { workingDays: [7], startsAt: '00:00', endsAt: '24:00', holidays: [] };
		const hoursOf = (from: string, to: string) => workingHoursBetween(at(from), at(to), sundays, zurich);
		expect(hoursOf('2027-03-27T12:00:00Z', '2027-03-29T12:00:00Z')).toBe(23);
		expect(hoursOf('2026-10-24T12:00:00Z', '2026-10-26T12:00:00Z')).toBe(25);
		expect(hoursOf('2026-10-17T12:00:00Z', '2026-10-19T12:00:00Z')).toBe(24);
	});

	it('begins anew strictly after an instant, on the next working day', () => {
		// Tuesday 1 December 2026 begins at 07:00 in Zurich, 06:00Z.
		expect(iso(beginOfWorkAfter(at('2026-12-01T05:59:59Z'), defaultCalendar, zurich))).toBe('2026-12-01T06:00:00.000Z');
		expect(iso(beginOfWorkAfter(at('2026-12-01T06:00:00Z'), defaultCalendar, zurich))).toBe('2026-12-02T06:00:00.000Z');
		expect(iso(beginOfWorkAfter(at('2026-12-04T12:00:00Z'), defaultCalendar, zurich))).toBe('2026-12-07T06:00:00.000Z');
	});

	it('is another zone’s time in another zone', () => {
		// 08:00 on a Monday in Auckland is still Sunday in Los Angeles.
		const monday = at('2026-12-06T19:00:00Z');
		expect(isWorkingTime(monday, defaultCalendar, 'Pacific/Auckland')).toBe(true);
		expect(isWorkingTime(monday, defaultCalendar, 'America/Los_Angeles')).toBe(false);
		expect(iso(nextWorkingTime(monday, defaultCalendar, 'America/Los_Angeles'))).toBe('2026-12-07T15:00:00.000Z');
	});

	it('refuses what is no number of hours or days', () => {
		for (const hours of [-1, Number.NaN, 10_001])
			expect(() => addWorkingHours(new Date(0), hours, defaultCalendar, 'UTC')).toThrow(RangeError);
		for (const days of [-1, 1.5, 1001]) expect(() => addWorkingDays(new Date(0), days, defaultCalendar, 'UTC')).toThrow(RangeError);
	});
});

const zones = [
	'UTC',
	zurich,
	'America/New_York',
	'Asia/Kolkata',
	'Australia/Lord_Howe',
	'Pacific/Chatham',
	'America/Sao_Paulo',
	'Africa/Cairo',
];
const quarterMs = 15 * 60_000;
const clock = (minutes: number) => `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`;
const calendars = fc
	.record({
		workingDays: fc.uniqueArray(fc.integer({ min: 1, max: 7 }), { minLength: 1, maxLength: 7 }),
		// Quarter hours: no zone is off by less.
		start: fc.integer({ min: 0, max: 92 }).map((quarter) => quarter * 15),
		length: fc.integer({ min: 4, max: 96 }).map((quarter) => quarter * 15),
		holidays: fc.array(
			fc.integer({ min: 0, max: 400 }).map((n) => new Date(Date.UTC(2026, 0, 1 + n)).toISOString().slice(0, 10)),
			{ maxLength: 30 },
		),
	})
	.map(
		({ workingDays, start, length, holidays }): WorkingCalendar => ({
			workingDays,
			startsAt: clock(start),
			endsAt: clock(Math.min(1440, start + length)),
			holidays,
		}),
	);
const moments = fc.integer({ min: Date.UTC(2026, 0, 1), max: Date.UTC(2027, 0, 30) }).map((ms) => new Date(ms));
const worlds = fc.record({ calendar: calendars, zone: fc.constantFrom(...zones), from: moments });

const clocks = new Map(
	zones.map((timeZone) => [timeZone, new Intl.DateTimeFormat('sv-SE', { timeZone, dateStyle: 'short', timeStyle: 'medium' })]),
);

/** The wall clock in a zone by another road: the Swedish locale writes ISO 8601. */
function wallClock(at: Date, timeZone: string): { day: string; weekday: number; minutes: number } {
	const [day = '', time = ''] = (clocks.get(timeZone)?.format(at) ?? '').split(' ');
	return { day, weekday: new Date(`${day}T00:00:00Z`).getUTCDay() || 7, minutes: minutesOf(time.slice(0, 5)) };
}

function isWorkedByClock(at: Date, { workingDays, holidays, startsAt, endsAt }: WorkingCalendar, timeZone: string): boolean {
	const { day, weekday, minutes } = wallClock(at, timeZone);
	return workingDays.includes(weekday) && !holidays.includes(day) && minutes >= minutesOf(startsAt) && minutes < minutesOf(endsAt);
}

describe('working time, whatever the calendar and the zone', () => {
	it('agrees with a count by quarter hours of the wall clock', () => {
		fc.assert(
			fc.property(worlds, fc.integer({ min: 1, max: 80 }), ({ calendar, zone, from }, quarters) => {
				const begin = new Date(Math.floor(from.getTime() / quarterMs) * quarterMs);
				// Hours that begin or end within the gap of a change of clocks have no one answer on the wall.
				fc.pre(minutesOf(calendar.startsAt) >= 240 && minutesOf(calendar.endsAt) < 1380);
				let left = quarters;
				let now = begin.getTime();
				while (left > 0) {
					if (isWorkedByClock(new Date(now), calendar, zone)) left -= 1;
					now += quarterMs;
					if (now - begin.getTime() > 15 * 86_400_000) return;
				}
				expect(iso(addWorkingHours(begin, quarters / 4, calendar, zone))).toBe(new Date(now).toISOString());
			}),
			{ numRuns: 40 },
		);
	});

	it('adds up: hours by parts, days by parts, and back by what lies between', () => {
		fc.assert(
			fc.property(worlds, fc.integer({ min: 0, max: 90 }), fc.integer({ min: 0, max: 90 }), ({ calendar, zone, from }, a, b) => {
				const whole = addWorkingHours(from, a + b, calendar, zone);
				const parts = addWorkingHours(addWorkingHours(from, a, calendar, zone), b, calendar, zone);
				// An end of work and the next beginning are the same working time.
				expect(workingHoursBetween(from, whole, calendar, zone)).toBeCloseTo(a + b, 9);
				expect(iso(nextWorkingTime(parts, calendar, zone))).toBe(iso(nextWorkingTime(whole, calendar, zone)));
				expect(whole.getTime()).toBeGreaterThanOrEqual(from.getTime());
			}),
			{ numRuns: 300 },
		);
	});

	it('ends days within working days, in order, at the same time of day', () => {
		fc.assert(
			fc.property(worlds, fc.integer({ min: 1, max: 60 }), ({ calendar, zone, from }, n) => {
				fc.pre(minutesOf(calendar.startsAt) >= 240 && minutesOf(calendar.endsAt) < 1380);
				const begin = nextWorkingTime(from, calendar, zone);
				const end = addWorkingDays(from, n, calendar, zone);
				expect(isWorkedByClock(end, calendar, zone)).toBe(true);
				expect(wallClock(end, zone).minutes).toBe(wallClock(begin, zone).minutes);
				expect(iso(addWorkingDays(addWorkingDays(from, n - 1, calendar, zone), 1, calendar, zone))).toBe(iso(end));
			}),
			{ numRuns: 300 },
		);
	});
});
