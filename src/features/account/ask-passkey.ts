import {
	type PublicKeyCredentialCreationOptionsJSON,
	type PublicKeyCredentialRequestOptionsJSON,
	startAuthentication,
	startRegistration,
} from '@simplewebauthn/browser';
import type { z } from 'zod';
import type { madePasskey, shownPasskey } from '#shared/account/factors-contract.ts';

/** What the server asked with; made by the library whose other half reads it here. */
interface Asked {
	challengeId: string;
	options: Record<string, unknown>;
}

/** The device asks the person and answers; throws where it was stopped, or has no passkey of this server. */
export async function showPasskey({ challengeId, options }: Asked) {
	const answer = await startAuthentication({ optionsJSON: options as unknown as PublicKeyCredentialRequestOptionsJSON });
	return { challengeId, response: answer as z.input<typeof shownPasskey> };
}

/** The device makes a new one. */
export async function makePasskey({ challengeId, options }: Asked) {
	const answer = await startRegistration({ optionsJSON: options as unknown as PublicKeyCredentialCreationOptionsJSON });
	return { challengeId, response: answer as z.input<typeof madePasskey> };
}

/** A device's own refusal in words; the server's are words already. */
export function passkeyFault(error: unknown, origin: string | null): string | null {
	if (!(error instanceof Error) || !['NotAllowedError', 'AbortError', 'InvalidStateError', 'SecurityError'].includes(error.name))
		return null;
	if (error.name === 'InvalidStateError') return 'This device has a passkey for your account already.';
	if (error.name === 'SecurityError') return `Passkeys of this server work at ${origin ?? 'its own name'} alone. Open it there.`;
	return 'No passkey was shown. Nothing was changed; try again, or use another way.';
}
