import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { PairsOfSetup, Relabelling } from '#shared/fit/contract.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField, SelectField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface RelabelDialogProps {
	pairs: PairsOfSetup;
	relabellings: readonly Relabelling[];
	/** All relabellings once this one is among them. */
	onSay: (relabellings: readonly Relabelling[]) => void;
	onClose: () => void;
}

const fields = z
	.object({ target: z.string().min(1, 'Which target?'), mark: z.string().min(1, 'Which mark?'), reason: plainText(300) })
	.refine(({ target, mark }) => target !== mark, { path: ['mark'], message: 'It is labelled so already.' });

/** Takes one target for another mark than the one it is labelled as. */
export function RelabelDialog({ pairs, relabellings, onSay, onClose }: RelabelDialogProps) {
	const marks = [...pairs.pairs.map(({ name }) => name), ...pairs.controlWithoutTarget].sort((a, b) =>
		a.localeCompare(b, 'en', { numeric: true }),
	);
	return (
		<Dialog isOpen onClose={onClose} title="Give a target another label">
			<p className="mt-0">
				The file stays as it is. The fit takes the sighting for the mark chosen here; whatever was labelled as that mark is left out of it.
			</p>
			<Form
				schema={fields}
				values={{ target: '', mark: '', reason: '' }}
				onSubmit={({ target, mark, reason }) => {
					onSay(withRelabelling(relabellings, { target, mark, reason }));
					return Promise.resolve();
				}}
			>
				<div className="grid gap-3.5 tablet:grid-cols-2">
					<SelectField name="target" label="Target, as in the file" options={choices(pairs.targets ?? [])} />
					<SelectField name="mark" label="Is the mark" options={choices(marks)} />
				</div>
				<LongTextField name="reason" label="Reason" hint="Kept with the fit and printed with it." />
				<Submit beside={<Button onClick={onClose}>Leave it as it is</Button>}>Give it this label</Submit>
			</Form>
		</Dialog>
	);
}

/** A target and a mark stand once each: an earlier word on either gives way. */
export function withRelabelling(relabellings: readonly Relabelling[], added: Relabelling): Relabelling[] {
	return [...relabellings.filter(({ target, mark }) => target !== added.target && mark !== added.mark), added];
}

function choices(names: readonly string[]): { value: string; label: string }[] {
	return [{ value: '', label: 'choose' }, ...names.map((name) => ({ value: name, label: name }))];
}
