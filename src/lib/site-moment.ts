import { z } from 'zod';
import { isoMoment } from './format.ts';

/** What a field for date and hour gives: "2026-12-04T06:30", meant by the site's clock. */
export const fieldMoment = z.string().regex(/^\d{4}-\d\d-\d\dT\d\d:\d\d$/, 'Write date and hour.');

/** For a field for date and hour: the moment by the site's clock. */
export function fieldTextOf(at: Date, timeZone: string): string {
	return isoMoment(at, timeZone).replace(' ', 'T');
}

/** The moment that a field's text means by the site's clock, wherever the device is. An hour that the change to summer time skips is the one after. */
export function siteMoment(text: string, timeZone: string): Date {
	const asUtcMs = Date.parse(`${text}:00Z`);
	const offsetMs = (atMs: number) => Date.parse(`${fieldTextOf(new Date(atMs), timeZone)}:00Z`) - atMs;
	const firstMs = asUtcMs - offsetMs(asUtcMs);
	return new Date(asUtcMs - offsetMs(firstMs));
}
