import { useMutation } from '@tanstack/react-query';
import { z } from 'zod';
import { leastPasswordLength, newPassword } from '#shared/account/password-rule.ts';
import { api } from '#src/lib/api.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const schema = z.object({ password: newPassword });

/** A new password by the mailed link. */
export function ResetForm({ token, onDone }: { token: string; onDone: () => void }) {
	const reset = useMutation(api.account.resetPassword.mutationOptions({ onSuccess: onDone }));
	return (
		<Form schema={schema} values={{ password: '' }} onSubmit={({ password }) => reset.mutateAsync({ token, password })}>
			<TextField
				name="password"
				type="password"
				label="New password"
				hint={`At least ${leastPasswordLength} characters. A few words that do not belong together do well.`}
				autoComplete="new-password"
			/>
			<Submit next="You are signed out everywhere, then sign in with it.">Set the password</Submit>
		</Form>
	);
}
