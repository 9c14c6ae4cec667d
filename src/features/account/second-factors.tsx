import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { isoMoment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { Button } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { AgainDialog } from './again-dialog.tsx';
import { CodesSetUp } from './codes-set-up.tsx';
import { PasskeyList } from './passkey-list.tsx';

/** What is asked besides the password: codes of an app, passkeys, recovery codes. Every change asks first who one is. */
export function SecondFactors() {
	const queries = useQueryClient();
	const now = useNow();
	const { data } = useSuspenseQuery(api.account.factors.queryOptions());
	const [wanted, want] = useState<(() => void) | null>(null);
	const [recoveryCodes, showRecovery] = useState<readonly string[] | null>(null);
	const refresh = () => queries.invalidateQueries({ queryKey: api.account.factors.key() });
	const begin = useMutation(api.account.beginCodes.mutationOptions());
	const remove = useMutation(api.account.removeCodes.mutationOptions({ onSuccess: refresh }));
	const renew = useMutation(
		api.account.newRecoveryCodes.mutationOptions({
			onSuccess: async (made) => {
				showRecovery(made.recoveryCodes);
				await refresh();
			},
		}),
	);
	/** Does it where the session is fresh, else after the person said who they are. */
	const withProof = (act: () => void) => {
		if (data.freshUntil !== null && data.freshUntil > now) act();
		else want(() => act);
	};
	const fault = begin.error ?? remove.error ?? renew.error;
	const zone = Intl.DateTimeFormat().resolvedOptions().timeZone;
	return (
		<>
			{data.askedBy.length > 0 && !data.hasSecondFactor && (
				<div className="mb-3">
					<Notice kind="note" title={`${data.askedBy.join(', ')} asks for a second factor of who signs, adopts or issues.`}>
						{data.codesSince === null && data.passkeys.length === 0
							? 'Set up one of the two below.'
							: 'You have one; in this session it was not shown yet.'}
					</Notice>
					<Button onClick={() => want(() => () => undefined)}>Show it now</Button>
				</div>
			)}
			<h3 className="m-0 mb-1 font-strong">Codes of an app</h3>
			<p className="m-0 mb-2 text-second">
				{data.codesSince === null
					? 'Not set up. An app on your phone shows a code of six digits that is asked after the password.'
					: `Asked at every sign-in since ${isoMoment(data.codesSince, zone)}; ${data.recoveryCodesLeft} recovery codes left.`}
			</p>
			<div className="flex flex-wrap gap-2.5">
				{data.codesSince === null ? (
					<Button isBusy={begin.isPending} onClick={() => withProof(() => begin.mutate({}))}>
						Set up codes
					</Button>
				) : (
					<>
						<Button isBusy={renew.isPending} onClick={() => withProof(() => renew.mutate({}))}>
							New recovery codes
						</Button>
						<Button isBusy={remove.isPending} onClick={() => withProof(() => remove.mutate({}))}>
							Remove codes
						</Button>
					</>
				)}
			</div>
			{fault !== null && (
				<p role="alert" className="m-0 mt-2 border-l-[7px] border-l-ink pl-3 font-medium">
					{refusalOf(fault).message}
				</p>
			)}
			{begin.data !== undefined && data.codesSince === null && (
				<CodesSetUp {...begin.data} onConfirmed={showRecovery} onLeave={() => begin.reset()} />
			)}
			{recoveryCodes !== null && <RecoveryCodes codes={recoveryCodes} onKept={() => showRecovery(null)} />}
			<PasskeyList passkeys={data.passkeys} origin={data.passkeyOrigin} withProof={withProof} />
			<AgainDialog
				isOpen={wanted !== null}
				hasCodes={data.codesSince !== null}
				hasPasskeys={data.passkeys.length > 0}
				onClose={() => want(null)}
				onFresh={() => {
					wanted?.();
					want(null);
				}}
			/>
		</>
	);
}

function RecoveryCodes({ codes, onKept }: { codes: readonly string[]; onKept: () => void }) {
	return (
		<section aria-label="Recovery codes" className="sheet mt-3 max-w-[46rem] px-4.5 py-4">
			<p className="m-0 mb-2 font-strong">Keep these where the phone is not. Each opens once, and they are shown this once.</p>
			<ul className="m-0 mb-3 grid list-none gap-x-6 p-0 font-mono tablet:grid-cols-2">
				{codes.map((code) => (
					<li key={code}>{code}</li>
				))}
			</ul>
			<Button onClick={onKept}>I have kept them</Button>
		</section>
	);
}
