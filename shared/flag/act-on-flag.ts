import {
	type FlagAct,
	type FlagActor,
	type FlagLife,
	type FlagMoment,
	type FlagOutcome,
	type FlagRefusal,
	isOverdue,
} from './flag-life.ts';
import type { FlagDecision } from './flag-schema.ts';
import { mayAct } from './may-act.ts';
import { measuredAgain, withWhomItIs } from './measured-again.ts';

const refused = (code: FlagRefusal['code'], message: string): FlagOutcome => ({ ok: false, refusal: { code, message } });
const changed = (flag: FlagLife): FlagOutcome => ({ ok: true, flag });

/**
 * One act on a flag: the flag after it, or why not. The only way a flag's state changes; each state has its acts, and whoever may not act is
 * refused before the state is looked at. A flag closes on a later published check that is within, on a concession (with the owner's consent
 * where the site asks it), or, too close to call, on being taken as measured inside its limits; no act closes it by hand.
 */
export function actOnFlag(flag: FlagLife, act: FlagAct, actor: FlagActor, moment: FlagMoment): FlagOutcome {
	if (!mayAct(actor, act.kind, flag, act.kind === 'decide' ? act.decision.kind : undefined))
		return refused('not-yours', 'Your role on this site does not allow this.');
	if (flag.state === 'lapsed') return refused('not-now', 'This flag has lapsed; nothing more is to be done about it.');
	switch (act.kind) {
		case 'answer':
			return answer(flag, act, moment);
		case 'ask-time':
			return askTime(flag, act.until, moment);
		case 'grant-time':
			if (flag.timeAsked === null) return refused('no-time-asked', 'No more time is asked for on this flag.');
			return changed({ ...flag, answerBy: flag.timeAsked, timeAsked: null });
		case 'decide':
			return decide(flag, act.decision, moment);
		case 'consent':
			return consent(flag, act.isGiven);
		case 'put-right':
			if (flag.state !== 'decided' || !isWork(flag.decision))
				return refused('not-now', 'Nothing is decided here that could be put right. The project engineer decides first.');
			return changed({ ...flag, state: 'put-right', putRightAt: moment.now });
		case 'measured-again':
			return changed(measuredAgain(flag, act.finding, moment));
		case 'lapse':
			return changed({ ...flag, state: 'lapsed', lapsedBecause: act.because, answerBy: null, timeAsked: null, isConsentAwaited: false });
	}
}

/** A decision that asks for work on the site. */
function isWork(decision: FlagDecision | null): boolean {
	return decision?.kind === 'rework' || decision?.kind === 'repair' || decision?.kind === 'reject-and-replace';
}

function answer(flag: FlagLife, act: Extract<FlagAct, { kind: 'answer' }>, { now }: FlagMoment): FlagOutcome {
	if (flag.state !== 'open' && flag.state !== 'answered')
		return refused('already-decided', 'This flag is decided already, so its answer stands as it was given.');
	if (flag.isWith === 'engineers') return refused('measuring-again', 'This is being measured again; no answer is needed yet.');
	if (act.answer.kind === 'put-right' && act.answer.by.getTime() <= now)
		return refused('in-the-past', 'By when it will be put right lies in the past.');
	return changed({ ...flag, state: 'answered', answer: act.answer, timeAsked: null });
}

function askTime(flag: FlagLife, until: number, { now }: FlagMoment): FlagOutcome {
	if (flag.state !== 'open' || flag.answerBy === null) return refused('not-now', 'No clock runs on this flag, so no more time is needed.');
	if (until <= Math.max(now, flag.answerBy)) return refused('in-the-past', 'Ask for a time after the one there is.');
	return changed({ ...flag, timeAsked: until });
}

function decide(flag: FlagLife, decision: FlagDecision, moment: FlagMoment): FlagOutcome {
	if (flag.state === 'closed') return refused('not-now', 'This flag is closed; a later check that is worse opens it again.');
	if (flag.state === 'put-right') return refused('not-now', 'This is put right and waits for its survey.');
	const isTooClose = flag.verdict !== 'outside';
	if (decision.kind === 'taken-as-measured' && !isTooClose)
		return refused('not-too-close', 'This is outside by more than its uncertainty: it is answered and decided, not taken as measured.');
	if (isTooClose && flag.isWith === 'engineers' && decision.kind !== 'taken-as-measured' && decision.kind !== 'survey-again')
		return refused('measuring-again', 'This is too close to call: survey it again, or take it as measured, with a reason.');
	const isUnanswered = flag.state === 'open' && flag.isWith === 'contractor';
	if (isUnanswered && decision.kind !== 'survey-again' && !isOverdue(flag, moment.now))
		return refused('not-answered-yet', 'The contractor still has time to answer. Decide after the answer, or after the deadline.');
	if (decision.kind === 'concession' && decision.limits.upToMm < flag.worstMm)
		return refused('below-measured', 'The concession stops short of what was measured, so the flag would be open again at once.');
	const decided: FlagLife = {
		...flag,
		state: 'decided',
		decision,
		isDecidedWithoutAnswer: isUnanswered && decision.kind !== 'survey-again',
		isConsentAwaited: false,
		timeAsked: null,
	};
	if (decision.kind === 'concession') {
		if (moment.isConsentAsked) return changed({ ...decided, isConsentAwaited: true });
		return changed({ ...decided, state: 'closed', closedOn: 'concession' });
	}
	if (decision.kind !== 'taken-as-measured') return changed(decided);
	if (flag.isInsideAlone) return changed({ ...decided, state: 'closed', closedOn: 'taken-as-measured' });
	// Outside by the deviation alone: from now on a flag like any that is outside.
	return changed({ ...decided, state: 'open', decision: null, verdict: 'outside', ...withWhomItIs('outside', flag.companyId, moment) });
}

function consent(flag: FlagLife, isGiven: boolean): FlagOutcome {
	if (flag.state !== 'decided' || !flag.isConsentAwaited) return refused('not-now', 'No concession waits for your consent here.');
	if (isGiven) return changed({ ...flag, state: 'closed', closedOn: 'concession', isConsentAwaited: false });
	const state = flag.answer === null ? 'open' : 'answered';
	return changed({ ...flag, state, decision: null, isDecidedWithoutAnswer: false, isConsentAwaited: false });
}
