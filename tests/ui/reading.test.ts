import { afterEach, describe, expect, it } from 'vitest';
import { bytes, calendarDay, day, limitsMm, metres, moment, plainMm, signedMm } from '#src/lib/format.ts';
import { chooseReading } from '#src/lib/reading.ts';

afterEach(() => chooseReading({ decimalMark: '.', dateLanguage: 'en' }));
const now = new Date('2026-12-03T08:00:00Z');

describe('a person’s own way of reading', () => {
	it('writes figures with their decimal mark', () => {
		chooseReading({ decimalMark: ',', dateLanguage: 'en' });
		expect([signedMm(-0.44, 0.5), plainMm(0.44, 0.5), metres(-12.3456), limitsMm([-2.5, 10]), bytes(3_400_000)]).toEqual([
			'−0,4',
			'0,4',
			'−12,346',
			'−2,5 to +10',
			'3,4 MB',
		]);
	});

	it('names days and months in their language, the hour by the site’s clock', () => {
		const at = new Date('2026-12-04T16:00:00Z');
		expect([moment(at, 'Europe/Zurich', now), day(at, 'UTC'), calendarDay('2026-05-03', now)]).toEqual([
			'Fri 4 Dec 17:00',
			'Fri 4 Dec',
			'3 May',
		]);
		chooseReading({ decimalMark: '.', dateLanguage: 'de' });
		expect([moment(at, 'Europe/Zurich', now), day(at, 'UTC'), calendarDay('2026-05-03', now)]).toEqual([
			'Fr. 4 Dez. 17:00',
			'Fr. 4 Dez.',
			'3 Mai',
		]);
		chooseReading({ decimalMark: '.', dateLanguage: 'fr' });
		expect(day(at, 'UTC')).toBe('ven. 4 déc.');
	});
});
