import type { Role } from '../permissions.ts';
import type { ClosingCause, FlagAnswer, FlagDecision, FlagState, FlagVerdict, LapseCause } from './flag-schema.ts';

/** What a later published check found of the flag's element and kind: the worst of its checkpoints. Millimetres. */
export interface FlagFinding {
	readonly checkId: string;
	readonly verdict: 'within' | FlagVerdict;
	/** The greatest distance from the design, either way. */
	readonly worstMm: number;
	/** Inside its limits by the deviation alone. */
	readonly isInsideAlone: boolean;
}

/** A flag as its life sees it: values only. Times are milliseconds UTC. */
export interface FlagLife {
	readonly state: FlagState;
	/** Who has it: the contractor whose pour it is, or first the engineers (too close to call, undecided, no company). */
	readonly isWith: 'contractor' | 'engineers';
	readonly companyId: string | null;
	readonly verdict: FlagVerdict;
	readonly worstMm: number;
	readonly isInsideAlone: boolean;
	/** The check it rests on now. */
	readonly checkId: string;
	/** Counts from 1; reopening begins the next. */
	readonly round: number;
	/** The contractor's deadline; null where no clock runs. */
	readonly answerBy: number | null;
	/** "Needs until …", not granted yet. */
	readonly timeAsked: number | null;
	readonly answer: FlagAnswer | null;
	readonly decision: FlagDecision | null;
	/** Decided after the deadline with no answer. */
	readonly isDecidedWithoutAnswer: boolean;
	/** A concession that waits for the owner's representative. */
	readonly isConsentAwaited: boolean;
	readonly closedOn: ClosingCause | null;
	readonly lapsedBecause: LapseCause | null;
	/** When the work was last put right. */
	readonly putRightAt: number | null;
}

/** Whoever acts. The server itself (a check published or withdrawn) has no roles and says so. */
export type FlagActor = 'server' | { readonly roles: readonly Role[]; readonly companyIds: readonly string[] };

export type FlagAct =
	| { readonly kind: 'answer'; readonly answer: FlagAnswer }
	| { readonly kind: 'ask-time'; readonly until: number }
	| { readonly kind: 'grant-time' }
	| { readonly kind: 'decide'; readonly decision: FlagDecision }
	| { readonly kind: 'consent'; readonly isGiven: boolean }
	| { readonly kind: 'put-right' }
	| { readonly kind: 'measured-again'; readonly finding: FlagFinding }
	| { readonly kind: 'lapse'; readonly because: LapseCause };
export type FlagActKind = FlagAct['kind'];

export interface FlagMoment {
	readonly now: number;
	/** The deadline that a new clock gets, by the site's calendar. */
	readonly answerBy: number;
	/** The site asks the owner's representative before a concession holds. */
	readonly isConsentAsked: boolean;
}

export interface FlagRefusal {
	readonly code:
		| 'not-yours'
		| 'not-now'
		| 'measuring-again'
		| 'already-decided'
		| 'not-answered-yet'
		| 'in-the-past'
		| 'no-time-asked'
		| 'not-too-close'
		| 'below-measured';
	readonly message: string;
}

export type FlagOutcome = { readonly ok: true; readonly flag: FlagLife } | { readonly ok: false; readonly refusal: FlagRefusal };

/** The contractor's clock has run out with no answer. */
export function isOverdue({ state, answerBy }: Pick<FlagLife, 'state' | 'answerBy'>, now: number): boolean {
	return state === 'open' && answerBy !== null && now > answerBy;
}
