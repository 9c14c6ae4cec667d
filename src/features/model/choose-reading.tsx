import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { unitInWords } from '#shared/model/ifc-units.ts';
import type { MapScaleReading } from '#shared/model/reading-choices.ts';
import { api, client } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

type Choice = { subject: 'unit'; metresPerUnit: number | null } | { subject: 'map-scale'; reading: MapScaleReading | null };

interface ChooseReadingProps {
	siteId: string;
	modelId: string;
	/** What may be chosen, each with what it is called. */
	options: readonly { label: string; choice: Choice }[];
}

/** One press for each reading that may hold; the reason is asked for and kept. */
export function ChooseReading({ siteId, modelId, options }: ChooseReadingProps) {
	const queries = useQueryClient();
	const [wanted, setWanted] = useState<(typeof options)[number] | null>(null);
	return (
		<>
			{options.map((option) => (
				<Button key={option.label} onClick={() => setWanted(option)}>
					{option.label}
				</Button>
			))}
			<Dialog isOpen={wanted !== null} onClose={() => setWanted(null)} title={wanted?.label ?? ''}>
				<p className="mt-0">Later readings of this model go by it. What is read and checked already stays as it is.</p>
				<Form
					schema={z.object({ reason: plainText(400) })}
					values={{ reason: '' }}
					onSubmit={async ({ reason }) => {
						if (wanted === null) return;
						await client.model.chooseReading({ siteId, modelId, choice: wanted.choice, reason });
						await queries.invalidateQueries({ queryKey: api.model.saidOfReading.key() });
						setWanted(null);
					}}
				>
					<LongTextField name="reason" label="How it is known" hint="A distance or a point that was measured. It stands on the record." />
					<Submit beside={<Button onClick={() => setWanted(null)}>Leave it open</Button>}>Choose it</Submit>
				</Form>
			</Dialog>
		</>
	);
}

/** A unit that may hold, as an option. */
export function unitOption(metresPerUnit: number): ChooseReadingProps['options'][number] {
	return { label: `It is in ${unitInWords(metresPerUnit)}`, choice: { subject: 'unit', metresPerUnit } };
}

/** Both readings of a map scale, as options. */
export const scaleOptions: ChooseReadingProps['options'] = [
	{ label: 'The scale as written holds', choice: { subject: 'map-scale', reading: 'as-written' } },
	{ label: 'The units alone hold', choice: { subject: 'map-scale', reading: 'by-units' } },
];
