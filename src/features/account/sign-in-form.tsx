import { useMutation } from '@tanstack/react-query';
import { signInInput } from '#shared/account/contract.ts';
import { api } from '#src/lib/api.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { stepTokenOf } from './second-factor-asked.ts';
import { useCameIn } from './use-came-in.ts';

interface SignInFormProps {
	onSignedIn: () => void;
	/** The password was right, and a second code is asked. */
	onSecond: (stepToken: string) => void;
}

/** E-mail address and password. */
export function SignInForm({ onSignedIn, onSecond }: SignInFormProps) {
	const signIn = useMutation(api.account.signIn.mutationOptions({ onSuccess: useCameIn(onSignedIn) }));
	return (
		<Form
			schema={signInInput}
			values={{ email: '', password: '' }}
			onSubmit={async (values) => {
				try {
					await signIn.mutateAsync(values);
				} catch (error) {
					const stepToken = stepTokenOf(error);
					if (stepToken === null) throw error;
					onSecond(stepToken);
				}
			}}
		>
			<TextField name="email" type="email" label="E-mail address" autoComplete="username" />
			<TextField name="password" type="password" label="Password" autoComplete="current-password" />
			<Submit>Sign in</Submit>
		</Form>
	);
}
