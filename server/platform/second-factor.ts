import type { Handle } from '../db/database.ts';
import type { Member, SignedIn } from './platform.ts';
import { Refused } from './refuse.ts';
import { siteSettingsOf } from './site-settings.ts';

/**
 * Beside every act that signs, adopts or issues: REFUSED where the site asks for a second factor and none was shown in this session. A
 * passkey, a code of an app and a recovery code count; what is asked is that it was shown, not that it was set up.
 */
export async function requireSecondFactor(db: Handle, member: Member): Promise<void> {
	if (member.proof?.hasSecondFactor) return;
	const { settings } = await siteSettingsOf(db, member.siteId);
	if (!settings.needsSecondFactor) return;
	throw new Refused(
		'second-factor-needed',
		'This site asks for a second factor of who signs, adopts or issues. Set one up in your account, or show it there; nothing was changed.',
	);
}

/** True where the person proved who they are within the last ten minutes, in this session. */
export function isFresh({ proof }: SignedIn, now: Date): boolean {
	return proof?.freshUntil !== null && proof?.freshUntil !== undefined && proof.freshUntil > now;
}

/** REFUSED, code `not-fresh`, unless the person proved who they are within the last ten minutes: the client asks for it, then tries again. */
export function requireFresh(person: SignedIn, now: Date): void {
	if (isFresh(person, now)) return;
	throw new Refused('not-fresh', 'Say again who you are: with your password, a code or a passkey. It holds for ten minutes.');
}
