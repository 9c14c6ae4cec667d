import { useSuspenseQuery } from '@tanstack/react-query';
import { type ReactNode, useState } from 'react';
import { AgainDialog } from '#src/features/account/again-dialog.tsx';
import { api } from '#src/lib/api.ts';
import { isoMoment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { Button } from '#src/ui/button.tsx';

/** Whether who signs has said lately who they are; what says or asks it; and the dialog that asks, to stand outside of the form. */
export interface Proof {
	whyNot: string | null;
	shown: ReactNode;
	dialog: ReactNode;
}

const freshMs = 10 * 60_000;

/** Signing asks once for ten minutes: by password, a code of the app or a passkey. Where it was said, nothing is asked and until when is said. */
export function useProof(timeZone: string): Proof {
	const now = useNow();
	const { data } = useSuspenseQuery(api.account.factors.queryOptions());
	const [isAsking, setIsAsking] = useState(false);
	const { freshUntil, codesSince, passkeys } = data;
	const isFresh = freshUntil !== null && freshUntil > now;
	const hour = (at: Date) => isoMoment(at, timeZone).slice(-5);
	return {
		whyNot: isFresh ? null : 'Say again who you are first.',
		shown: isFresh ? (
			<p className="m-0 text-second">
				Signed in again at {hour(new Date(freshUntil.getTime() - freshMs))}, until {hour(freshUntil)}.
			</p>
		) : (
			<div className="flex flex-wrap items-center gap-x-4 gap-y-2">
				<Button onClick={() => setIsAsking(true)}>Say again who you are</Button>
				<span className="text-second">It holds for ten minutes, for all you sign.</span>
			</div>
		),
		dialog: (
			<AgainDialog
				isOpen={isAsking}
				hasCodes={codesSince !== null}
				hasPasskeys={passkeys.length > 0}
				onClose={() => setIsAsking(false)}
				onFresh={() => setIsAsking(false)}
			/>
		),
	};
}
