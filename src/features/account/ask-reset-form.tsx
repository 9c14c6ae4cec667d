import { useMutation } from '@tanstack/react-query';
import { z } from 'zod';
import { emailAddress } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { Notice } from '#src/ui/notice.tsx';

const schema = z.object({ email: emailAddress });

/** Asks for a link to a new password; says the same whether the address is known or not. */
export function AskResetForm() {
	const ask = useMutation(api.account.askReset.mutationOptions());
	if (ask.isSuccess) {
		return (
			<Notice kind="note" title="Look into your mail.">
				If {ask.variables.email} has an account here, a link is on its way. It holds for half an hour, for one use.
			</Notice>
		);
	}
	return (
		<Form schema={schema} values={{ email: '' }} onSubmit={ask.mutateAsync}>
			<TextField name="email" type="email" label="E-mail address" autoComplete="username" />
			<Submit>Send the link</Submit>
		</Form>
	);
}
