import type { ReactNode } from 'react';
import { NumberField, SelectField, TextField } from '#src/ui/field.tsx';

const answers = [
	{ value: '', label: 'not stated' },
	{ value: 'yes', label: 'yes' },
	{ value: 'no', label: 'no' },
];
const ppmPlaces = [
	{ value: '', label: 'not stated' },
	{ value: 'in-instrument', label: 'in the instrument' },
	{ value: 'afterwards', label: 'afterwards, to the distances' },
	{ value: 'not-applied', label: 'not applied' },
];

/** The observation record of a survey, folded: what is left blank is printed as "not stated". */
export function SurveyObservationFields() {
	const at = (name: string) => `survey.observation.${name}`;
	return (
		<Fold title="How it was measured" hint="Certificate, prism, weather, ppm, field check. Blank is printed as “not stated”.">
			<Part title="Instrument">
				<TextField name={at('certificate')} label="Certificate no." isMono />
				<TextField name={at('calibratedOn')} type="date" label="Calibrated on" />
				<TextField name={at('prismType')} label="Prism type" />
				<NumberField name={at('prismConstantMm')} label="Prism constant" unit="mm" isOptional />
				<SelectField name={at('fieldCheck')} label="Field check before use" options={answers} />
				<TextField name={at('fieldCheckNote')} label="Its value, or why not" />
				<SelectField name={at('twoFaces')} label="Targets in two faces" options={answers} />
				<TextField name={at('twoFacesNote')} label="Which, or why not" />
			</Part>
			<Part title="Weather">
				<NumberField name={at('temperatureC')} label="Temperature" unit="°C" isOptional />
				<NumberField name={at('pressureHPa')} label="Pressure" unit="hPa" isOptional />
				<TextField name={at('wind')} label="Wind" />
				<span className="max-tablet:hidden" />
				<NumberField name={at('ppm')} label="Correction set" unit="ppm" isOptional />
				<SelectField name={at('ppmApplied')} label="Where it is applied, once only" options={ppmPlaces} />
			</Part>
			<Part title="Scope">
				<TextField name={at('notSurveyed')} label="Not surveyed, and why" className="tablet:col-span-2" />
				<TextField name={at('remarks')} label="Remarks" className="tablet:col-span-2" />
			</Part>
		</Fold>
	);
}

/** The same of one set-up: heights, and what closing showed. */
export function SetupObservationFields({ index, name }: { index: number; name: string }) {
	const at = (field: string) => `setups.${index}.observation.${field}`;
	return (
		<Fold title={`How set-up ${name} was measured`} hint="Heights of instrument and target, closing difference, level run.">
			<div className="grid gap-4 tablet:grid-cols-2">
				<NumberField name={`setups.${index}.instrumentHeightM`} label="Instrument height" unit="m" isOptional />
				<NumberField name={at('targetHeightM')} label="Target height" unit="m" isOptional />
				<NumberField name={at('closingMm')} label="Closing sight, off by" hint="The first target again at the end" unit="mm" isOptional />
				<NumberField
					name={at('closingArcSeconds')}
					label="The same in direction"
					hint="More than about 3 mm or 10″ voids the set-up"
					unit="″"
					isOptional
				/>
				<TextField name={at('remarks')} label="Remarks" />
			</div>
			<Part title="Level run">
				<TextField name={at('levelStart')} label="Starting benchmark" hint="As the control list names it" />
				<TextField name={at('levelClose')} label="Closing benchmark" hint="The same where it was a loop" />
				<NumberField name={at('levelLengthKm')} label="Length levelled" hint="There and back counted both" unit="km" isOptional />
				<NumberField
					name={at('levelMisclosureMm')}
					label="Misclosure"
					hint="Judged against 10·√km mm (common practice)"
					unit="mm"
					isOptional
				/>
			</Part>
		</Fold>
	);
}

function Fold({ title, hint, children }: { title: string; hint: string; children: ReactNode }) {
	return (
		<details className="border-t border-hair pt-1">
			<summary className="min-h-11 content-center py-1.5 pointer-coarse:min-h-12">
				<b className="font-strong">{title}</b> <span className="text-second">{hint}</span>
			</summary>
			<div className="mt-2 flex flex-col gap-4 pb-2">{children}</div>
		</details>
	);
}

function Part({ title, children }: { title: string; children: ReactNode }) {
	return (
		<fieldset className="m-0 border-0 p-0">
			<legend className="mb-1.5 p-0 font-medium text-second">{title}</legend>
			<div className="grid gap-4 tablet:grid-cols-2">{children}</div>
		</fieldset>
	);
}
