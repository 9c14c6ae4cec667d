import { z } from 'zod';
import { siteInput } from '../base-contract.ts';
import { decisionRule } from '../tolerance/sheet-schema.ts';

/** "07:30"; "24:00" is the day's end. */
const clockTime = z.string().regex(/^(?:[01]\d|2[0-3]):[0-5]\d$|^24:00$/, 'Write a time as 07:30.');

/** Minutes since midnight of "07:30". */
export function minutesOf(time: string): number {
	const [hours = 0, minutes = 0] = time.split(':').map(Number);
	return hours * 60 + minutes;
}

const calendarDate = z.iso.date('Write a date as 2026-12-25.');

/** When people work on a site, in its own zone; deadlines count these hours alone. */
export const workingCalendar = z
	.strictObject({
		/** 1 is Monday, 7 Sunday (ISO 8601). */
		workingDays: z.array(z.number().int().min(1).max(7)).min(1, 'At least one day a week.').max(7),
		startsAt: clockTime,
		endsAt: clockTime,
		holidays: z.array(calendarDate).max(400, 'At most 400 days.'),
	})
	.refine(({ startsAt, endsAt }) => minutesOf(endsAt) - minutesOf(startsAt) >= 60, {
		path: ['endsAt'],
		message: 'The working day ends at least an hour after it begins.',
	});
export type WorkingCalendar = z.infer<typeof workingCalendar>;

const spacing = z.number().min(0.25, 'At least 0.25 m.').max(20, 'At most 20 m.');

/** How closely checkpoints are placed on a new revision, and which kinds at all. */
export const checkpointDensity = z.strictObject({
	/** The widest step between neighbours, metres, on faces (walls, columns, sides of beams; edges of slabs at half as much again) and on levels (slabs, footings, tops of walls). */
	faceSpacingM: spacing,
	levelSpacingM: spacing,
	kinds: z
		.strictObject({ plan: z.boolean(), face: z.boolean(), level: z.boolean() })
		.refine(({ plan, face, level }) => plan || face || level, {
			path: ['plan'],
			message: 'At least one kind of checkpoint.',
		}),
});
export type CheckpointDensity = z.infer<typeof checkpointDensity>;

/** What a site has agreed for itself; the project engineer sets it, every change is on the record. */
export const siteSettings = z.strictObject({
	timeZone: z.string().min(1).max(60),
	calendar: workingCalendar,
	/** A fit is checked by another person than who adopted it; without, every page that rests on it says so. */
	isFitCheckedBySecond: z.boolean(),
	/** What a new tolerance sheet begins with. */
	defaultDecision: decisionRule,
	checkpoints: checkpointDensity,
	/** A concession holds only with the owner's representative's consent. */
	needsOwnersConsent: z.boolean(),
	/** Who signs, adopts or issues has a second factor: codes of an app, or a passkey. */
	needsSecondFactor: z.boolean(),
});
export type SiteSettings = z.infer<typeof siteSettings>;

/** Monday to Friday, 07:00 to 17:00, no holidays (common practice; each site sets its own). */
export const defaultCalendar: WorkingCalendar = { workingDays: [1, 2, 3, 4, 5], startsAt: '07:00', endsAt: '17:00', holidays: [] };

/** Two metres between neighbours on faces, three on levels, every kind (own). */
export const defaultCheckpointDensity: CheckpointDensity = {
	faceSpacingM: 2,
	levelSpacingM: 3,
	kinds: { plan: true, face: true, level: true },
};

/** `version` goes back with a change: who read an older one is told, not overruled. */
export const keptSettings = z.object({ settings: siteSettings, version: z.number().int() });
export const saveSettingsInput = siteInput.extend({ settings: siteSettings, version: z.number().int() });
