import { mayWith, type Role } from '#shared/permissions.ts';
import type { PourDetail, ShownHoldPoint } from '#shared/pour/contract.ts';
import { type HoldPointKind, holdPointKinds } from '#shared/pour/pour-life.ts';

/** What this person may do here: absent is not theirs; a text says why not now; null: it can be done. */
export interface PourActs {
	call?: string | null;
	submit?: string | null;
	sign?: string | null;
	begin?: string | null;
	end?: null;
	/** Per hold point: only where something is released there. */
	withdraw: Partial<Record<HoldPointKind, string | null>>;
}

interface ActsOf {
	site: { roles: readonly Role[] };
	pour: PourDetail;
	shown: ShownHoldPoint;
	point: HoldPointKind;
}

/** The acts of a pour's page by role and state; the server judges them again. */
export function pourActs({ site: { roles }, pour, shown, point }: ActsOf): PourActs {
	const state = pour.points[point].state;
	const isReleased = state === 'released' || state === 'released-with-conditions';
	const acts: PourActs = { withdraw: {} };
	if (mayWith(roles, 'pour.call')) {
		if (!isReleased || pour.isHeld) acts.call = state === 'submitted' ? 'It is with the owner’s representative.' : null;
		if (pour.state === 'planned' && point === 'before-pour')
			acts.begin = pour.isHeld ? 'Hold: do not pour.' : isReleased ? null : 'This pour is not released. Do not pour.';
		if (pour.state === 'concreting') acts.end = null;
	}
	if (mayWith(roles, 'pour.submit') && (!isReleased || pour.isHeld)) {
		const isCalled = state === 'called' || state === 'more-asked' || (isReleased && pour.isHeld);
		acts.submit =
			state === 'submitted'
				? 'It is submitted already.'
				: !isCalled
					? 'The contractor calls the hold point first.'
					: shown.shown.isReady
						? null
						: 'It is not ready: see why below.';
	}
	if (mayWith(roles, 'pour.release')) {
		if (!isReleased) acts.sign = shown.whyNotSign ?? (state === 'submitted' ? null : 'It is not submitted yet.');
		for (const kind of holdPointKinds) {
			if (!['released', 'released-with-conditions'].includes(pour.points[kind].state)) continue;
			const isCast = pour.state === 'cast' || pour.state === 'cast-in-part';
			acts.withdraw[kind] =
				kind === 'before-pour' && isCast ? 'It is cast: its release before the pour is noted, never withdrawn.' : shown.whyNotSign;
		}
	}
	return acts;
}
