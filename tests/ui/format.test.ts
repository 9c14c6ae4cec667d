import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	bytes,
	calendarDay,
	count,
	counted,
	distanceInTime,
	isoMoment,
	limitsMm,
	metres,
	moment,
	plainMm,
	signedMm,
	uncertaintyMm,
} from '#src/lib/format.ts';

describe('millimetres', () => {
	it.each([
		[16, 3, '+16'],
		[-8, 1, '−8'],
		[0.4, 0.6, '+0.4'],
		[-0.4, 3, '0'],
		[-0.04, 0.5, '0.0'],
		[null, null, '–'],
		[Number.NaN, 3, '–'],
	])('%s with U %s is %s', (value, uncertainty, text) => {
		expect(signedMm(value, uncertainty)).toBe(text);
	});

	it('has a real minus, a sign on all but zero, and reads back to within half its last place', () => {
		fc.assert(
			fc.property(
				fc.double({ min: -1e4, max: 1e4, noNaN: true }),
				fc.option(fc.double({ min: 0, max: 20, noNaN: true })),
				(value, uncertainty) => {
					const text = signedMm(value, uncertainty);
					expect(text).not.toContain('-');
					const back = Number(text.replace('−', '-'));
					expect(Math.abs(back - value)).toBeLessThanOrEqual(uncertainty !== null && uncertainty < 1 ? 0.0500001 : 0.5000001);
					expect(/^[+−]/.test(text)).toBe(back !== 0);
				},
			),
		);
	});

	it('writes U and limits', () => {
		expect(uncertaintyMm(0.83)).toBe('0.8');
		expect(uncertaintyMm(3.2)).toBe('3');
		expect(plainMm(-16, 3)).toBe('16');
		expect(limitsMm([-10, 10])).toBe('−10 to +10');
		expect(limitsMm([0, 2.5])).toBe('0 to +2.5');
		expect(limitsMm([null, 6], true)).toBe('up to 6');
		expect(limitsMm([-5, null])).toBe('from −5');
		expect(limitsMm(null)).toBe('no limits');
	});
});

describe('other figures', () => {
	it('writes metres, counts and sizes', () => {
		expect(metres(-12.3456)).toBe('−12.346');
		expect(metres(-0.0001)).toBe('0.000');
		expect(metres(null)).toBe('–');
		expect(count(1234567)).toBe('1\u00a0234\u00a0567');
		expect(counted(1, 'flag')).toBe('1 flag');
		expect(counted(6, 'flag')).toBe('6 flags');
		expect([740, 12_000, 3_400_000, 999_600, 1_200_000_000].map(bytes)).toEqual(['740 B', '12 kB', '3.4 MB', '1.0 MB', '1.2 GB']);
	});
});

describe('moments', () => {
	const now = new Date('2025-12-03T12:00:00Z');
	it('are written in the zone of the site, not of the reader', () => {
		const at = new Date('2025-12-05T17:00:00Z');
		expect(moment(at, 'Europe/London', now)).toBe('Fri 5 Dec 17:00');
		expect(moment(at, 'Pacific/Auckland', now)).toBe('Sat 6 Dec 06:00');
		expect(isoMoment(at, 'Pacific/Auckland')).toBe('2025-12-06 06:00');
		expect(moment(new Date('2026-01-02T00:00:00Z'), 'Europe/London', now)).toBe('Fri 2 Jan 2026 00:00');
		expect(calendarDay('2025-12-03', now)).toBe('3 Dec');
		expect(calendarDay('2024-02-09', now)).toBe('9 Feb 2024');
	});
	it('says how far off', () => {
		const inHours = (hours: number) => distanceInTime(new Date(now.getTime() + hours * 3_600_000), now);
		expect([inHours(0), inHours(0.5), inHours(21), inHours(72), inHours(-2)]).toEqual([
			'now',
			'in 30 min',
			'in 21 h',
			'in 3 days',
			'2 h ago',
		]);
	});
});
