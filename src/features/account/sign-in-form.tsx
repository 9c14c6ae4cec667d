import { useMutation, useQueryClient } from '@tanstack/react-query';
import { signInInput } from '#shared/account/contract.ts';
import { api } from '#src/lib/api.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

/** E-mail address and password; tells the rest of the program who came in. */
export function SignInForm({ onSignedIn }: { onSignedIn: () => void }) {
	const queries = useQueryClient();
	const signIn = useMutation(
		api.account.signIn.mutationOptions({
			onSuccess: (person) => {
				// What another person saw on this device is forgotten first.
				queries.clear();
				queries.setQueryData(api.account.me.queryKey(), person);
				onSignedIn();
			},
		}),
	);
	return (
		<Form schema={signInInput} values={{ email: '', password: '' }} onSubmit={signIn.mutateAsync}>
			<TextField name="email" type="email" label="E-mail address" autoComplete="username" />
			<TextField name="password" type="password" label="Password" autoComplete="current-password" />
			<Submit>Sign in</Submit>
		</Form>
	);
}
