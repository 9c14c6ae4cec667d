import { useState } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface ReasonDialogProps {
	title: string;
	/** What the reason is for and where it will be read. */
	hint: string;
	/** The verb on the button. */
	act: string;
	/** Reasons often given, to take with one press. */
	usual: readonly string[];
	longest: number;
	onSay: (reason: string) => Promise<unknown> | undefined;
	onClose: () => void;
	/** What is shown above the field: what is adopted, whole. */
	children?: React.ReactNode;
}

/** Asks why, because it will be read later by who was not there. */
export function ReasonDialog({ title, hint, act, usual, longest, onSay, onClose, children }: ReasonDialogProps) {
	const [taken, setTaken] = useState('');
	return (
		<Dialog isOpen onClose={onClose} title={title}>
			{children}
			<div className="mb-3 flex flex-wrap gap-2">
				{usual.map((reason) => (
					<Button key={reason} onClick={() => setTaken(reason)}>
						{reason}
					</Button>
				))}
			</div>
			<Form
				key={taken}
				schema={z.object({ reason: plainText(longest) })}
				values={{ reason: taken }}
				onSubmit={async ({ reason }) => onSay(reason)}
			>
				<LongTextField name="reason" label="Reason" hint={hint} />
				<Submit beside={<Button onClick={onClose}>Leave it as it is</Button>}>{act}</Submit>
			</Form>
		</Dialog>
	);
}
