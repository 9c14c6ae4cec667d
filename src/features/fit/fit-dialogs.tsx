import { useId, useState } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { SurveyorInCharge } from '#shared/fit/contract.ts';
import { surveyorInCharge } from '#shared/fit/contract.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface StandDialogProps {
	title: string;
	/** The verb on the button. */
	act: string;
	/** What the sentence is for. */
	label: string;
	hint: string;
	/** Sentences often given, to take with one press. */
	usual: readonly string[];
	/** Who was named before, if anybody. */
	inCharge: SurveyorInCharge | null;
	onSay: (said: string, inCharge: SurveyorInCharge) => Promise<unknown>;
	onClose: () => void;
	/** What is stood for, whole. */
	children: React.ReactNode;
}

const fields = z.object({ said: plainText(500), inCharge: surveyorInCharge });
const nobody: SurveyorInCharge = { name: '', licence: '', jurisdiction: '' };

/** Standing for a fit: to adopt it, or to have checked it as the second person. Asks a sentence, and who answers for the survey. */
export function StandDialog({ title, act, label, hint, usual, inCharge, onSay, onClose, children }: StandDialogProps) {
	const [taken, setTaken] = useState('');
	const foldId = useId();
	return (
		<Dialog isOpen onClose={onClose} title={title}>
			{children}
			<div className="mb-3 flex flex-wrap gap-2">
				{usual.map((sentence) => (
					<Button key={sentence} onClick={() => setTaken(sentence)}>
						{sentence}
					</Button>
				))}
			</div>
			<Form
				key={taken}
				schema={fields}
				values={{ said: taken, inCharge: inCharge ?? nobody }}
				onSubmit={({ said, inCharge: named }) => onSay(said, named)}
			>
				<LongTextField name="said" label={label} hint={hint} />
				<details open={inCharge !== null} className="border-t border-hair pt-2">
					<summary id={foldId} className="min-h-9 font-medium">
						Surveyor in charge, as printed
					</summary>
					<div className="mt-2 grid gap-3 tablet:grid-cols-3">
						<TextField name="inCharge.name" label="Name" />
						<TextField name="inCharge.licence" label="Licence no." isMono />
						<TextField name="inCharge.jurisdiction" label="Jurisdiction" />
					</div>
				</details>
				<Submit beside={<Button onClick={onClose}>Leave it as it is</Button>}>{act}</Submit>
			</Form>
		</Dialog>
	);
}
