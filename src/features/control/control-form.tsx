import { useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { controlFrame } from '#shared/control/contract.ts';
import type { PointTableReading } from '#shared/survey/point-table-schema.ts';
import { api, client } from '#src/lib/api.ts';
import { Choice } from '#src/ui/choice.tsx';
import { NumberField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface ControlFormProps {
	siteId: string;
	suggestedName: string;
	/** Which rows bring σ of their own. */
	hasSigma: boolean;
	rowCount: number;
	reading: PointTableReading;
	/** Sends the file and answers the upload's id. */
	send: () => Promise<string>;
	onStored: () => void;
}

const millimetres = z.number('Write a number, in mm.').positive('More than 0.').max(10_000, 'At most 10 m.').nullable();
const fields = z
	.object({ name: plainText(60), frame: controlFrame, sigmaPlanMm: millimetres, sigmaHeightMm: millimetres })
	.refine(({ sigmaPlanMm, sigmaHeightMm }) => (sigmaPlanMm === null) === (sigmaHeightMm === null), {
		path: ['sigmaHeightMm'],
		message: 'Give both or neither.',
	});

/** What a control file does not say of itself. */
export function ControlForm({ siteId, suggestedName, hasSigma, rowCount, reading, send, onStored }: ControlFormProps) {
	const queries = useQueryClient();
	return (
		<Form
			schema={fields}
			values={{ name: suggestedName, frame: 'design', sigmaPlanMm: null, sigmaHeightMm: null }}
			onSubmit={async ({ name, frame, sigmaPlanMm, sigmaHeightMm }) => {
				const uploadId = await send();
				await client.control.store({
					siteId,
					uploadId,
					name,
					frame,
					reading,
					defaultSigmaM: sigmaPlanMm !== null && sigmaHeightMm !== null ? { plan: sigmaPlanMm / 1000, height: sigmaHeightMm / 1000 } : null,
				});
				await Promise.all(
					[api.control.key(), api.fit.key(), api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })),
				);
				onStored();
			}}
		>
			<TextField name="name" label="Name of this control" hint="As it stands on its register" />
			<Choice
				name="frame"
				legend="The coordinates are in"
				isRow
				options={[
					{ value: 'design', label: 'the design’s frame', detail: 'the model’s own coordinates' },
					{ value: 'map', label: 'the map’s frame', detail: 'easting, northing, height; carried over by the model’s map conversion' },
				]}
			/>
			<div className="grid gap-4 tablet:grid-cols-2">
				<NumberField
					name="sigmaPlanMm"
					label="σ in plan"
					hint={hasSigma ? 'For rows that bring none' : 'The file gives none; empty: not known'}
					unit="mm"
					isOptional
				/>
				<NumberField name="sigmaHeightMm" label="σ in height" hint="One standard deviation" unit="mm" isOptional />
			</div>
			<Submit next="All rows or none. What stands on older control is told so.">Store {rowCount} control points</Submit>
		</Form>
	);
}
