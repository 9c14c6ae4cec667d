import type { SurveyorInCharge } from '#shared/fit/contract.ts';

/** What to write of the surveyor in charge: nothing where nothing was said, so that what the first person said stays. */
export function saidSurveyor(said: SurveyorInCharge | undefined): { surveyorInCharge?: SurveyorInCharge } {
	return said === undefined || Object.values(said).every((part) => part === '') ? {} : { surveyorInCharge: said };
}
