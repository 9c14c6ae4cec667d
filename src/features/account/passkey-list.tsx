import { useMutation, useQueryClient } from '@tanstack/react-query';
import type { Passkey } from '#shared/account/factors-contract.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { isoMoment } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { makePasskey, passkeyFault } from './ask-passkey.ts';
import { deviceWords } from './device-words.ts';

interface PasskeyListProps {
	passkeys: readonly Passkey[];
	origin: string | null;
	withProof: (act: () => void) => void;
}

/** The person's passkeys: add one of this device, remove one. */
export function PasskeyList({ passkeys, origin, withProof }: PasskeyListProps) {
	const queries = useQueryClient();
	const refresh = () => queries.invalidateQueries({ queryKey: api.account.factors.key() });
	const add = useMutation({
		mutationFn: async () => {
			const made = await makePasskey(await client.account.beginPasskey());
			return client.account.addPasskey({ ...made, name: deviceWords(navigator.userAgent) });
		},
		onSuccess: refresh,
	});
	const remove = useMutation(api.account.removePasskey.mutationOptions({ onSuccess: refresh }));
	const zone = Intl.DateTimeFormat().resolvedOptions().timeZone;
	const fault = add.error ?? remove.error;
	return (
		<>
			<h3 className="m-0 mt-6 mb-1 font-strong">Passkeys</h3>
			<p className="m-0 mb-2 text-second">
				A device signs for you, by finger, face or its own code: no password, and nothing that could be typed into a wrong page.
			</p>
			{passkeys.length > 0 && (
				<ul className="m-0 mb-3 list-none border-t border-rule p-0">
					{passkeys.map(({ passkeyId, name, createdAt, lastUsedAt }) => (
						<li key={passkeyId} className="flex min-h-14 flex-wrap items-center gap-x-4 border-b border-rule py-2">
							<span className="min-w-0 flex-1 basis-60">
								<span className="block font-strong">{name}</span>
								<span className="block text-second">
									since {isoMoment(createdAt, zone)}, {lastUsedAt === null ? 'not used yet' : `last used ${isoMoment(lastUsedAt, zone)}`}
								</span>
							</span>
							<Button
								weight="plain"
								isBusy={remove.isPending && remove.variables.passkeyId === passkeyId}
								onClick={() => withProof(() => remove.mutate({ passkeyId }))}
							>
								Remove
							</Button>
						</li>
					))}
				</ul>
			)}
			<Button
				isBusy={add.isPending}
				whyNot={origin === null ? 'Passkeys need a server with a name; this one is known by a number alone.' : null}
				onClick={() => withProof(() => add.mutate())}
			>
				Add a passkey of this device
			</Button>
			{fault !== null && (
				<p role="alert" className="m-0 mt-2 border-l-[7px] border-l-ink pl-3 font-medium">
					{passkeyFault(fault, origin) ?? refusalOf(fault).message}
				</p>
			)}
		</>
	);
}
