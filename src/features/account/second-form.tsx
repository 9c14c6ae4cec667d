import { useMutation } from '@tanstack/react-query';
import { z } from 'zod';
import { factorCode } from '#shared/account/factors-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { useCameIn } from './use-came-in.ts';

const schema = z.object({ code: factorCode });

interface SecondFormProps {
	stepToken: string;
	onSignedIn: () => void;
	onLeave: () => void;
}

/** The code of an app, or a recovery code, after the password or the mailed code. */
export function SecondForm({ stepToken, onSignedIn, onLeave }: SecondFormProps) {
	const open = useMutation(api.account.signInSecond.mutationOptions({ onSuccess: useCameIn(onSignedIn) }));
	return (
		<Form
			schema={schema}
			values={{ code: '' }}
			onSubmit={({ code }) => open.mutateAsync({ stepToken, code })}
			fieldOfCode={{ WRONG: 'code' }}
		>
			<TextField
				name="code"
				label="The code of your app"
				hint="Six digits. The phone is not at hand? A recovery code does as well."
				autoComplete="one-time-code"
			/>
			<Submit beside={<Button onClick={onLeave}>Begin again</Button>}>Sign in</Submit>
		</Form>
	);
}
