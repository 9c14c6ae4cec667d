import type { SurveySummary } from '#shared/survey/contract.ts';

const minus = '\u2212';

/** How a survey was measured, as far as it was said, and what was not; each half a sentence for a list. */
export function observationWords({ observation }: Pick<SurveySummary, 'observation'>): { said: string[]; notSaid: string[] } {
	const said: string[] = [];
	const notSaid: string[] = [];
	const tell = (name: string, value: string | null) => {
		if (value === null) notSaid.push(name);
		else said.push(`${name} ${value}`);
	};
	const words = (text: string | undefined) => (text ? text : null);
	const number = (value: number | null | undefined, unit: string) =>
		value === null || value === undefined ? null : `${String(value).replace('-', minus)} ${unit}`;
	const answer = (value: string | undefined, note: string | undefined) => (value ? [value, note].filter(Boolean).join(': ') : null);
	tell('certificate', words(observation?.certificate));
	tell('calibrated on', words(observation?.calibratedOn));
	tell('prism', words(observation?.prismType));
	tell('prism constant', number(observation?.prismConstantMm, 'mm'));
	tell('temperature', number(observation?.temperatureC, '°C'));
	tell('pressure', number(observation?.pressureHPa, 'hPa'));
	tell('wind', words(observation?.wind));
	tell('correction', number(observation?.ppm, 'ppm'));
	tell('applied', words(observation?.ppmApplied.replaceAll('-', ' ')));
	tell('field check', answer(observation?.fieldCheck, observation?.fieldCheckNote));
	tell('two faces', answer(observation?.twoFaces, observation?.twoFacesNote));
	tell('not surveyed', words(observation?.notSurveyed));
	if (observation?.remarks) said.push(observation.remarks);
	return { said, notSaid };
}
