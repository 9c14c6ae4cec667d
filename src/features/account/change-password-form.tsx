import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { leastPasswordLength, newPassword } from '#shared/account/password-rule.ts';
import { api } from '#src/lib/api.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const schema = z.object({ current: z.string().min(1, 'Write your password.').max(200), password: newPassword });

/** A new password for who knows the old one. */
export function ChangePasswordForm() {
	const queries = useQueryClient();
	const [changes, setChanges] = useState(0);
	const change = useMutation(
		api.account.changePassword.mutationOptions({
			onSuccess: async () => {
				setChanges((before) => before + 1);
				await queries.invalidateQueries({ queryKey: api.account.sessions.key() });
			},
		}),
	);
	return (
		<>
			{changes > 0 && (
				<p role="status" className="m-0 mb-3 font-medium">
					The password is changed; your other sessions are ended.
				</p>
			)}
			<Form
				key={changes}
				schema={schema}
				values={{ current: '', password: '' }}
				onSubmit={change.mutateAsync}
				fieldOfCode={{ WRONG: 'current' }}
				className="max-w-120"
			>
				<TextField name="current" type="password" label="The password you have" autoComplete="current-password" />
				<TextField
					name="password"
					type="password"
					label="The new one"
					hint={`At least ${leastPasswordLength} characters. A few words that do not belong together do well.`}
					autoComplete="new-password"
				/>
				<Submit next="All your other sessions end.">Change the password</Submit>
			</Form>
		</>
	);
}
