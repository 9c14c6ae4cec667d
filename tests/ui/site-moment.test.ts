import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fieldTextOf, siteMoment } from '#src/lib/site-moment.ts';

describe('a moment written by the site’s clock', () => {
	it('is meant there, wherever the device is', () => {
		expect(siteMoment('2026-12-04T06:30', 'Europe/Zurich').toISOString()).toBe('2026-12-04T05:30:00.000Z');
		expect(siteMoment('2026-07-04T06:30', 'Europe/Zurich').toISOString()).toBe('2026-07-04T04:30:00.000Z');
		expect(siteMoment('2026-12-04T06:30', 'America/New_York').toISOString()).toBe('2026-12-04T11:30:00.000Z');
	});
	it('reads back as it was written, all year', () => {
		const minutes = fc.integer({ min: Date.UTC(2024, 0) / 60_000, max: Date.UTC(2030, 0) / 60_000 });
		fc.assert(
			fc.property(minutes, fc.constantFrom('Europe/Zurich', 'America/St_Johns', 'Asia/Kolkata', 'Australia/Lord_Howe'), (minute, zone) => {
				const text = fieldTextOf(new Date(minute * 60_000), zone);
				expect(fieldTextOf(siteMoment(text, zone), zone)).toBe(text);
			}),
		);
	});
});
