import { useMutation } from '@tanstack/react-query';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { passkeyFault, showPasskey } from './ask-passkey.ts';
import { useCameIn } from './use-came-in.ts';

/** Sign in with a passkey of this device: no address, no password. */
export function PasskeyPress({ onSignedIn }: { onSignedIn: () => void }) {
	const cameIn = useCameIn(onSignedIn);
	const open = useMutation({
		mutationFn: async () => client.account.signInByPasskey(await showPasskey(await client.account.askPasskey({}))),
		onSuccess: cameIn,
	});
	return (
		<div className="flex flex-col gap-2">
			<Button isBusy={open.isPending} onClick={() => open.mutate()}>
				With a passkey
			</Button>
			{open.error !== null && (
				<p role="alert" className="m-0">
					{passkeyFault(open.error, null) ?? refusalOf(open.error).message}
				</p>
			)}
		</div>
	);
}
