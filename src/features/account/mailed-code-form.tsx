import { useMutation } from '@tanstack/react-query';
import { z } from 'zod';
import { emailAddress } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { TextField, TickField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { stepTokenOf } from './second-factor-asked.ts';
import { useCameIn } from './use-came-in.ts';

const askSchema = z.object({ email: emailAddress });
const codeSchema = z.object({ code: z.string().trim().min(8, 'Eight digits.').max(20), isOwnDevice: z.boolean() });

interface MailedCodeFormProps {
	onSignedIn: () => void;
	onSecond: (stepToken: string) => void;
}

/** Sign in by a code that is mailed; kept on this device where it is one's own. */
export function MailedCodeForm({ onSignedIn, onSecond }: MailedCodeFormProps) {
	const ask = useMutation(api.account.askCode.mutationOptions());
	const open = useMutation(api.account.signInByCode.mutationOptions({ onSuccess: useCameIn(onSignedIn) }));
	if (!ask.isSuccess) {
		return (
			<Form schema={askSchema} values={{ email: '' }} onSubmit={ask.mutateAsync}>
				<TextField name="email" type="email" label="E-mail address" autoComplete="username" />
				<Submit next="It holds for ten minutes, in this browser alone.">Mail me a code</Submit>
			</Form>
		);
	}
	const { token } = ask.data;
	return (
		<Form
			schema={codeSchema}
			values={{ code: '', isOwnDevice: false }}
			onSubmit={async (values) => {
				try {
					await open.mutateAsync({ token, ...values });
				} catch (error) {
					const stepToken = stepTokenOf(error);
					if (stepToken === null) throw error;
					onSecond(stepToken);
				}
			}}
			fieldOfCode={{ WRONG: 'code' }}
		>
			<p role="status" className="m-0">
				If {ask.variables.email} has an account here, a code is on its way.
			</p>
			<TextField name="code" label="The code from the mail" hint="Eight digits." autoComplete="one-time-code" />
			<TickField name="isOwnDevice" label="This device is mine: keep me signed in" hint="Else the session ends within half a day." />
			<Submit>Sign in</Submit>
		</Form>
	);
}
