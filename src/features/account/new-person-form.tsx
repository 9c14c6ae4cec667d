import { z } from 'zod';
import { leastPasswordLength, newPassword } from '#shared/account/password-rule.ts';
import { plainText } from '#shared/base-contract.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const schema = z.object({ newPerson: z.object({ name: plainText(80), password: newPassword }) });

/** Name and password of somebody who is new here. */
export function NewPersonForm({ onSend }: { onSend: (person: { name: string; password: string }) => Promise<unknown> }) {
	return (
		<Form schema={schema} values={{ newPerson: { name: '', password: '' } }} onSubmit={({ newPerson }) => onSend(newPerson)}>
			<TextField name="newPerson.name" label="Your name" hint="As it shall stand beside what you do." autoComplete="name" />
			<TextField
				name="newPerson.password"
				type="password"
				label="A password"
				hint={`At least ${leastPasswordLength} characters. A few words that do not belong together do well.`}
				autoComplete="new-password"
			/>
			<Submit>Accept and go in</Submit>
		</Form>
	);
}
