import { useQueryClient } from '@tanstack/react-query';
import { useMemo } from 'react';
import { z } from 'zod';
import { setupInput, surveyForm } from '#shared/survey/contract.ts';
import { blankSetupObservation, blankSurveyObservation } from '#shared/survey/observation-record.ts';
import { stages } from '#shared/tolerance/sheet-schema.ts';
import { api, client } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { NumberField, SelectField, TextField, TickField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { SetupObservationFields, SurveyObservationFields } from './observation-fields.tsx';
import { saidOf } from './observation-said.ts';
import type { ReadFile } from './point-file.tsx';
import { stageWords } from './survey-words.ts';

interface SurveyFormProps {
	siteId: string;
	read: ReadFile;
	/** Today's date in the site's zone, "2026-12-01". */
	today: string;
	send: () => Promise<string>;
	onStored: (surveyId: string) => void;
}

const sigmaMm = z.number('Write a number, in mm.').positive('More than 0.').max(10_000, 'At most 10 m.').nullable();
/** A set-up as it is written on site: millimetres, which the contract has in metres. */
const setupFields = setupInput
	.omit({ pointSigmaM: true })
	.extend({ sigmaPlanMm: sigmaMm, sigmaHeightMm: sigmaMm })
	.refine(({ sigmaPlanMm, sigmaHeightMm }) => (sigmaPlanMm === null) === (sigmaHeightMm === null), {
		path: ['sigmaHeightMm'],
		message: 'Give both or neither.',
	});
const fields = z.object({ survey: surveyForm, setups: z.array(setupFields) });

/** What a point file does not say: how, when and by whom it was measured, and what each set-up's points share. */
export function SurveyFormFields({ siteId, read, today, send, onStored }: SurveyFormProps) {
	const { file, reading, table } = read;
	const queries = useQueryClient();
	const setups = useMemo(() => setupsOf(table.rows), [table]);
	return (
		<Form
			schema={fields}
			values={{
				survey: {
					name: file.name.replace(/\.[a-z]+$/i, '').slice(0, 60),
					stage: 'as-cast',
					surveyedOn: today,
					observer: '',
					instrument: '',
					serial: '',
					observation: blankSurveyObservation,
				},
				setups: setups.map(({ name }) => ({
					name,
					levelling: 'levelled' as const,
					bringsScale: true,
					commonMm: 2,
					instrumentHeightM: null,
					sigmaPlanMm: null,
					sigmaHeightMm: null,
					observation: blankSetupObservation,
				})),
			}}
			onSubmit={async (said) => {
				const uploadId = await send();
				const { surveyId } = await client.survey.store({
					siteId,
					uploadId,
					reading,
					survey: saidOf(said.survey),
					setups: said.setups.map(({ sigmaPlanMm, sigmaHeightMm, ...setup }) => ({
						...saidOf(setup),
						pointSigmaM: sigmaPlanMm !== null && sigmaHeightMm !== null ? { plan: sigmaPlanMm / 1000, height: sigmaHeightMm / 1000 } : null,
					})),
				});
				await Promise.all([api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
				onStored(surveyId);
			}}
		>
			<div className="grid gap-4 tablet:grid-cols-2">
				<TextField name="survey.name" label="Name of the survey" />
				<SelectField name="survey.stage" label="Stage" options={stages.map((stage) => ({ value: stage, label: stageWords[stage] }))} />
				<TextField name="survey.surveyedOn" type="date" label="Surveyed on" />
				<TextField name="survey.observer" label="Observer" />
				<TextField name="survey.instrument" label="Instrument" hint="Make and type" />
				<TextField name="survey.serial" label="Its serial number" isMono />
			</div>
			<SurveyObservationFields />
			{setups.map((setup, index) => (
				<fieldset key={setup.name} className="sheet m-0 flex flex-col gap-3 px-4.5 pt-2 pb-4">
					<legend className="px-1 text-h2 font-strong">
						Set-up {setup.name} <span className="font-normal text-second">{counted(setup.pointCount, 'point')}</span>
					</legend>
					<div className="grid gap-4 tablet:grid-cols-2">
						<SelectField
							name={`setups.${index}.levelling`}
							label="Its Z axis"
							options={[
								{ value: 'levelled', label: 'plumb: levelled or compensated' },
								{ value: 'free', label: 'free: no compensator' },
							]}
						/>
						<NumberField
							name={`setups.${index}.commonMm`}
							label="Common part"
							hint="What all its points share: target height, prism constant; 2 where nothing is known"
							unit="mm"
						/>
						<NumberField
							name={`setups.${index}.sigmaPlanMm`}
							label="σ of a point in plan"
							hint={setup.hasSigma ? 'For rows that bring none' : 'The file gives none'}
							unit="mm"
							isOptional
						/>
						<NumberField
							name={`setups.${index}.sigmaHeightMm`}
							label="σ of a point in height"
							hint="One standard deviation"
							unit="mm"
							isOptional
						/>
					</div>
					<TickField name={`setups.${index}.bringsScale`} label="The instrument brings its own scale, so the fit has none" />
					<SetupObservationFields index={index} name={setup.name} />
				</fieldset>
			))}
			<Submit
				next={
					table.rows.length > 10_000
						? 'So many points are stored in the background; you can leave the page meanwhile.'
						: 'All rows or none. Then each set-up is fitted.'
				}
			>
				Store {counted(table.rows.length, 'point')}
			</Submit>
		</Form>
	);
}

/** The file's set-ups in the order of their first points; one called 1 where it names none. */
function setupsOf(rows: ReadFile['table']['rows']): { name: string; pointCount: number; hasSigma: boolean }[] {
	const setups = new Map<string, { name: string; pointCount: number; hasSigma: boolean }>();
	for (const row of rows) {
		const name = row.setup || '1';
		const setup = setups.get(name);
		if (setup) {
			setup.pointCount += 1;
			setup.hasSigma ||= row.sigmaM !== null;
		} else setups.set(name, { name, pointCount: 1, hasSigma: row.sigmaM !== null });
	}
	return [...setups.values()];
}
