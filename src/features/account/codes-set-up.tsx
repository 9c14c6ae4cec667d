import { useMutation, useQueryClient } from '@tanstack/react-query';
import { renderSVG } from 'uqr';
import { z } from 'zod';
import { factorCode } from '#shared/account/factors-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const schema = z.object({ code: factorCode });

interface CodesSetUpProps {
	secret: string;
	uri: string;
	onConfirmed: (recoveryCodes: readonly string[]) => void;
	onLeave: () => void;
}

/** The secret as a picture for the app's camera and as text, and the first code. */
export function CodesSetUp({ secret, uri, onConfirmed, onLeave }: CodesSetUpProps) {
	const queries = useQueryClient();
	const confirm = useMutation(
		api.account.confirmCodes.mutationOptions({
			onSuccess: async ({ recoveryCodes }) => {
				onConfirmed(recoveryCodes);
				await queries.invalidateQueries({ queryKey: api.account.factors.key() });
			},
		}),
	);
	// Black on white in every colour set: cameras read no other.
	const picture = `data:image/svg+xml;utf8,${encodeURIComponent(renderSVG(uri, { border: 2 }))}`;
	return (
		<div className="sheet mt-3 flex max-w-[46rem] flex-wrap gap-5 px-4.5 py-4">
			<img src={picture} alt="The secret, for the camera of an app" width={200} height={200} className="size-50 shrink-0 bg-white" />
			<div className="min-w-0 flex-1 basis-60">
				<p className="m-0">Scan it with an app for one-time codes, or type the secret:</p>
				<p data-testid="totp-secret" className="m-0 mb-3 font-mono break-all">
					{secret.match(/.{1,4}/g)?.join(' ')}
				</p>
				<Form schema={schema} values={{ code: '' }} onSubmit={confirm.mutateAsync} fieldOfCode={{ WRONG: 'code' }}>
					<TextField name="code" label="The code it shows now" autoComplete="one-time-code" />
					<Submit beside={<Button onClick={onLeave}>Leave it</Button>}>Set it up</Submit>
				</Form>
			</div>
		</div>
	);
}
