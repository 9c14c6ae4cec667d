import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { passkeyFault, showPasskey } from './ask-passkey.ts';

const passwordSchema = z.object({ password: z.string().min(1, 'Write your password.').max(200) });
const codeSchema = z.object({ code: z.string().trim().min(6, 'Six digits, or a recovery code.').max(40) });

interface AgainDialogProps {
	isOpen: boolean;
	/** Which ways the person has besides the password. */
	hasCodes: boolean;
	hasPasskeys: boolean;
	onClose: () => void;
	onFresh: () => void;
}

/** Asks once more who one is; holds for ten minutes in this session. */
export function AgainDialog({ isOpen, hasCodes, hasPasskeys, onClose, onFresh }: AgainDialogProps) {
	const queries = useQueryClient();
	const fresh = async () => {
		await queries.invalidateQueries({ queryKey: api.account.factors.key() });
		onFresh();
	};
	const say = useMutation(api.account.reauthenticate.mutationOptions({ onSuccess: fresh }));
	const show = useMutation({
		mutationFn: async () => {
			const shown = await showPasskey(await client.account.askPasskeyAgain());
			return client.account.reauthenticate({ proof: { way: 'passkey', ...shown } });
		},
		onSuccess: fresh,
	});
	return (
		<Dialog isOpen={isOpen} onClose={onClose} title="Say again who you are" acts={<Button onClick={onClose}>Leave it</Button>}>
			<p className="m-0 mb-4">It holds for ten minutes, on this device.</p>
			{hasPasskeys && (
				<div className="mb-4 flex flex-col gap-2">
					<Button isBusy={show.isPending} onClick={() => show.mutate()}>
						With a passkey
					</Button>
					{show.error !== null && (
						<p role="alert" className="m-0">
							{passkeyFault(show.error, null) ?? refusalOf(show.error).message}
						</p>
					)}
				</div>
			)}
			{hasCodes ? (
				<Form
					schema={codeSchema}
					values={{ code: '' }}
					onSubmit={({ code }) => say.mutateAsync({ proof: { way: 'code', code } })}
					fieldOfCode={{ WRONG: 'code' }}
				>
					<TextField name="code" label="The code of your app" autoComplete="one-time-code" />
					<Submit>It is me</Submit>
				</Form>
			) : (
				<Form
					schema={passwordSchema}
					values={{ password: '' }}
					onSubmit={({ password }) => say.mutateAsync({ proof: { way: 'password', password } })}
					fieldOfCode={{ WRONG: 'password' }}
				>
					<TextField name="password" type="password" label="Your password" autoComplete="current-password" />
					<Submit>It is me</Submit>
				</Form>
			)}
		</Dialog>
	);
}
