import { z } from 'zod';

/** How a survey was measured, as an observation record asks for it: every part may be blank, and a report says so where it is. */

const line = (longest: number) => z.string().trim().max(longest, `At most ${longest} characters.`);
const maybe = (least: number, most: number, unit: string) =>
	z
		.number(`Write a number, in ${unit}.`)
		.min(least, `Between ${least} and ${most} ${unit}.`)
		.max(most, `Between ${least} and ${most} ${unit}.`)
		.nullable();

/** Not asked or not answered is '' : said in the report, never taken for a no. */
const answer = z.enum(['', 'yes', 'no']);
export type Answer = z.infer<typeof answer>;

/** in-instrument: set at the instrument · afterwards: applied to the distances later · not-applied. Once only, or the distances are wrong by it twice. */
export const ppmPlaces = ['', 'in-instrument', 'afterwards', 'not-applied'] as const;

export const surveyObservation = z.strictObject({
	certificate: line(60),
	/** "2026-03-01" or ''. */
	calibratedOn: z.union([z.literal(''), z.iso.date('Write the date as 2026-12-01.')]),
	prismType: line(60),
	prismConstantMm: maybe(-200, 200, 'mm'),
	temperatureC: maybe(-60, 60, '°C'),
	pressureHPa: maybe(300, 1100, 'hPa'),
	wind: line(60),
	ppm: maybe(-500, 500, 'ppm'),
	ppmApplied: z.enum(ppmPlaces),
	/** Collimation, index, compensator, distance over a known base, before use. */
	fieldCheck: answer,
	fieldCheckNote: line(200),
	twoFaces: answer,
	twoFacesNote: line(200),
	/** What was not surveyed, and why. */
	notSurveyed: line(300),
	remarks: line(500),
});
export type SurveyObservation = z.infer<typeof surveyObservation>;

export const setupObservation = z.strictObject({
	targetHeightM: maybe(-10, 10, 'm'),
	/** The first target sighted again at the end, less at the beginning. */
	closingMm: maybe(0, 1000, 'mm'),
	closingArcSeconds: maybe(0, 3600, '″'),
	/** Of a level run, from its starting benchmark over its points to the closing one (the same in a loop): read less known. */
	levelMisclosureMm: maybe(-1000, 1000, 'mm'),
	/** Benchmarks as named in the control; absent in records from before they were asked. */
	levelStart: line(60).optional(),
	levelClose: line(60).optional(),
	/** The whole way that was levelled, there and back counted both. */
	levelLengthKm: maybe(0.001, 1000, 'km').optional(),
	remarks: line(200),
});
export type SetupObservation = z.infer<typeof setupObservation>;

export const blankSurveyObservation: SurveyObservation = {
	certificate: '',
	calibratedOn: '',
	prismType: '',
	prismConstantMm: null,
	temperatureC: null,
	pressureHPa: null,
	wind: '',
	ppm: null,
	ppmApplied: '',
	fieldCheck: '',
	fieldCheckNote: '',
	twoFaces: '',
	twoFacesNote: '',
	notSurveyed: '',
	remarks: '',
};

export const blankSetupObservation: SetupObservation = {
	targetHeightM: null,
	closingMm: null,
	closingArcSeconds: null,
	levelMisclosureMm: null,
	levelStart: '',
	levelClose: '',
	levelLengthKm: null,
	remarks: '',
};
