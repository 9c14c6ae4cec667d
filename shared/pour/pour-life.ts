import type { Role } from '../permissions.ts';

/** The life of a pour and of its two hold points: values only, no clock, no ids made here. The only way a state changes is `actOnPour`. */

export const pourStates = ['planned', 'concreting', 'cast', 'cast-in-part'] as const;
export type PourState = (typeof pourStates)[number];
export const holdPointStates = ['open', 'called', 'submitted', 'more-asked', 'released', 'released-with-conditions', 'refused'] as const;
export type HoldPointState = (typeof holdPointStates)[number];
export const holdPointKinds = ['before-pour', 'after-pour'] as const;
export type HoldPointKind = (typeof holdPointKinds)[number];

export interface PourLife {
	readonly state: PourState;
	readonly companyId: string;
	readonly points: Readonly<Record<HoldPointKind, HoldPointState>>;
	/** "Hold: do not pour" stands. */
	readonly isHeld: boolean;
}

/** Whoever acts; `server` finds what touches a pour and has no roles. */
export type PourActor = 'server' | { readonly userId: string; readonly roles: readonly Role[]; readonly companyIds: readonly string[] };

export type PourAct =
	| { readonly kind: 'call'; readonly point: HoldPointKind }
	| { readonly kind: 'submit'; readonly point: HoldPointKind }
	| { readonly kind: 'release'; readonly point: HoldPointKind; readonly conditionCount: number }
	| { readonly kind: 'ask-more'; readonly point: HoldPointKind }
	| { readonly kind: 'refuse'; readonly point: HoldPointKind }
	| { readonly kind: 'withdraw'; readonly point: HoldPointKind }
	| { readonly kind: 'start-concreting' }
	| { readonly kind: 'end-concreting'; readonly isWhole: boolean }
	| { readonly kind: 'touch' }
	| { readonly kind: 'see-hold' };

/** What an act's outcome depends on besides the state. */
export interface PourFacts {
	/** Every question of the point's list is answered. */
	readonly isListAnswered: boolean;
	readonly isReady: boolean;
	/** Who adopted or checked a fit the pour rests on, or issued its sheet: they cannot sign. */
	readonly preparedBy: readonly { readonly userId: string; readonly what: string }[];
}

export interface PourRefusal {
	readonly code: 'not-yours' | 'not-now' | 'list-open' | 'not-ready' | 'prepared-it' | 'held';
	readonly message: string;
}
export type PourOutcome = { readonly ok: true; readonly pour: PourLife } | { readonly ok: false; readonly refusal: PourRefusal };

const refused = (code: PourRefusal['code'], message: string): PourOutcome => ({ ok: false, refusal: { code, message } });
const isReleased = (state: HoldPointState): boolean => state === 'released' || state === 'released-with-conditions';
const notYours = refused('not-yours', 'Your role on this site does not allow this.');

/** Why this person cannot sign what others prepared, as a sentence; null where they can. */
export function whyNotSigner(userId: string, preparedBy: PourFacts['preparedBy']): string | null {
	const own = preparedBy.find((one) => one.userId === userId);
	return own === undefined ? null : `You ${own.what}, and what one has prepared another signs.`;
}

function mayDo(actor: PourActor, act: PourAct, pour: PourLife): boolean {
	if (act.kind === 'touch') return actor === 'server';
	if (actor === 'server') return false;
	const { roles, companyIds } = actor;
	switch (act.kind) {
		case 'call':
		case 'start-concreting':
		case 'end-concreting':
			return roles.includes('contractor') && companyIds.includes(pour.companyId);
		case 'submit':
			return roles.includes('project-engineer');
		case 'release':
		case 'ask-more':
		case 'refuse':
		case 'withdraw':
			return roles.includes('owners-representative');
		case 'see-hold':
			return roles.length > 0 && (roles.some((role) => role !== 'contractor') || companyIds.includes(pour.companyId));
	}
}

/** One act on a pour: the pour after it, or why not. Whoever may not act is refused before the state is looked at. */
export function actOnPour(pour: PourLife, act: PourAct, actor: PourActor, facts: PourFacts): PourOutcome {
	if (!mayDo(actor, act, pour)) return notYours;
	switch (act.kind) {
		case 'call':
			return call(pour, act.point);
		case 'submit':
			return submit(pour, act.point, facts);
		case 'release':
		case 'ask-more':
		case 'refuse':
			return decide(pour, act, actor, facts);
		case 'withdraw':
			return withdraw(pour, act.point, actor, facts);
		case 'start-concreting':
			if (pour.state !== 'planned') return refused('not-now', 'The concrete of this pour has begun already.');
			if (pour.isHeld) return refused('held', 'Hold: do not pour. Something touched this pour after its release.');
			if (!isReleased(pour.points['before-pour'])) return refused('not-now', 'This pour is not released. Do not pour.');
			return changed({ ...pour, state: 'concreting' });
		case 'end-concreting':
			if (pour.state !== 'concreting') return refused('not-now', 'No concrete is being placed in this pour.');
			return changed({ ...pour, state: act.isWhole ? 'cast' : 'cast-in-part', isHeld: false });
		case 'touch':
			if (isCast(pour)) return refused('not-now', 'This pour is cast; what comes after is noted, and its release stays.');
			if (!isReleased(pour.points['before-pour'])) return refused('not-now', 'Nothing is released here that could be touched.');
			return changed({ ...pour, isHeld: true });
		case 'see-hold':
			return pour.isHeld ? changed(pour) : refused('not-now', 'No hold stands on this pour.');
	}
}

function changed(pour: PourLife): PourOutcome {
	return { ok: true, pour };
}

function isCast({ state }: PourLife): boolean {
	return state === 'cast' || state === 'cast-in-part';
}

function setPoint(pour: PourLife, point: HoldPointKind, state: HoldPointState): PourLife {
	return { ...pour, points: { ...pour.points, [point]: state } };
}

function whyNotTime(pour: PourLife, point: HoldPointKind): string | null {
	if (point === 'after-pour') return isCast(pour) ? null : 'This pour is not cast yet; its second hold point comes after the concrete.';
	return isCast(pour) ? 'This pour is cast; its first hold point is past.' : null;
}

function call(pour: PourLife, point: HoldPointKind): PourOutcome {
	const wrongTime = whyNotTime(pour, point);
	if (wrongTime !== null) return refused('not-now', wrongTime);
	const state = pour.points[point];
	if (state === 'submitted') return refused('not-now', 'This hold point is with the owner’s representative.');
	if (isReleased(state) && !pour.isHeld) return refused('not-now', 'This hold point is released already.');
	return changed(setPoint(pour, point, 'called'));
}

function submit(pour: PourLife, point: HoldPointKind, facts: PourFacts): PourOutcome {
	const wrongTime = whyNotTime(pour, point);
	if (wrongTime !== null) return refused('not-now', wrongTime);
	const state = pour.points[point];
	const isHeldAgain = point === 'before-pour' && pour.isHeld && isReleased(state);
	if (state !== 'called' && state !== 'more-asked' && !isHeldAgain)
		return refused(
			'not-now',
			state === 'submitted' ? 'This hold point is submitted already.' : 'The contractor calls the hold point first.',
		);
	if (!facts.isListAnswered) return refused('list-open', 'The hold-point list is not answered whole. Answer it, then submit.');
	if (!facts.isReady) return refused('not-ready', 'This pour is not ready. What stands in the way is said sentence by sentence above.');
	return changed(setPoint(pour, point, 'submitted'));
}

function decide(
	pour: PourLife,
	act: Extract<PourAct, { kind: 'release' | 'ask-more' | 'refuse' }>,
	actor: PourActor,
	facts: PourFacts,
): PourOutcome {
	const own = actor === 'server' ? null : whyNotSigner(actor.userId, facts.preparedBy);
	if (own !== null) return refused('prepared-it', own);
	if (pour.points[act.point] !== 'submitted') return refused('not-now', 'This hold point is not submitted, so there is nothing to decide.');
	const wrongTime = whyNotTime(pour, act.point);
	if (wrongTime !== null) return refused('not-now', wrongTime);
	if (act.kind === 'ask-more') return changed(setPoint(pour, act.point, 'more-asked'));
	if (act.kind === 'refuse') return changed(setPoint(pour, act.point, 'refused'));
	if (!facts.isReady) return refused('not-ready', 'This pour is no longer ready, so it cannot be released. Look at what changed.');
	const released = setPoint(pour, act.point, act.conditionCount > 0 ? 'released-with-conditions' : 'released');
	return changed(act.point === 'before-pour' ? { ...released, isHeld: false } : released);
}

function withdraw(pour: PourLife, point: HoldPointKind, actor: PourActor, facts: PourFacts): PourOutcome {
	const own = actor === 'server' ? null : whyNotSigner(actor.userId, facts.preparedBy);
	if (own !== null) return refused('prepared-it', own);
	if (!isReleased(pour.points[point])) return refused('not-now', 'Nothing is released here that could be withdrawn.');
	if (point === 'before-pour' && isCast(pour))
		return refused('not-now', 'This pour is cast: its release before the pour is noted, never withdrawn.');
	const open = setPoint(pour, point, 'open');
	return changed(point === 'before-pour' ? { ...open, isHeld: true } : open);
}
