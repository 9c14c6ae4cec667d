import type { FlagFinding, FlagLife, FlagMoment } from './flag-life.ts';
import type { FlagVerdict } from './flag-schema.ts';

/** Who has a flag with this verdict, and until when: outside goes to the contractor with a clock, all else to the engineers without one. */
export function withWhomItIs(
	verdict: FlagVerdict,
	companyId: string | null,
	{ answerBy }: Pick<FlagMoment, 'answerBy'>,
): Pick<FlagLife, 'isWith' | 'answerBy'> {
	const isWith = verdict === 'outside' && companyId !== null ? 'contractor' : 'engineers';
	return { isWith, answerBy: isWith === 'contractor' ? answerBy : null };
}

/** A new flag. Null where there is nothing to flag. */
export function raiseFlag(finding: FlagFinding, companyId: string | null, moment: Pick<FlagMoment, 'answerBy'>): FlagLife | null {
	const { checkId, verdict, worstMm, isInsideAlone } = finding;
	if (verdict === 'within') return null;
	return {
		state: 'open',
		...withWhomItIs(verdict, companyId, moment),
		companyId,
		verdict,
		worstMm,
		isInsideAlone,
		checkId,
		round: 1,
		timeAsked: null,
		answer: null,
		decision: null,
		isDecidedWithoutAnswer: false,
		isConsentAwaited: false,
		closedOn: null,
		lapsedBecause: null,
		putRightAt: null,
	};
}

/** Open once more, nothing said yet. */
function reopened(flag: FlagLife, verdict: FlagVerdict, moment: FlagMoment): FlagLife {
	return {
		...flag,
		state: 'open',
		...withWhomItIs(verdict, flag.companyId, moment),
		round: flag.round + 1,
		timeAsked: null,
		answer: null,
		decision: null,
		isDecidedWithoutAnswer: false,
		isConsentAwaited: false,
		closedOn: null,
	};
}

/**
 * What a later published check does to a flag. Within: closed. Worse than what it was closed on: open again, and so where what was put right is
 * still off. Surveyed again as decided: the answer stands, the decision is to be made anew. Else it rests on the newer figures and stays as it is.
 */
export function measuredAgain(flag: FlagLife, finding: FlagFinding, moment: FlagMoment): FlagLife {
	const { checkId, verdict, worstMm, isInsideAlone } = finding;
	if (flag.state === 'lapsed') return flag;
	if (verdict === 'within') {
		const rested = { ...flag, checkId, worstMm, isInsideAlone };
		if (flag.state === 'closed') return rested;
		return { ...rested, state: 'closed', closedOn: 'check-within', answerBy: null, timeAsked: null, isConsentAwaited: false };
	}
	const rested: FlagLife = { ...flag, checkId, verdict, worstMm, isInsideAlone };
	switch (flag.state) {
		case 'closed':
			return isStillClosed(rested) ? rested : reopened(rested, verdict, moment);
		case 'put-right':
			return reopened(rested, verdict, moment);
		case 'decided': {
			const { decision } = flag;
			const isOvertaken =
				decision?.kind === 'survey-again' || (flag.isConsentAwaited && decision?.kind === 'concession' && worstMm > decision.limits.upToMm);
			if (!isOvertaken) return rested;
			if (flag.answer === null || verdict !== 'outside') return reopened(rested, verdict, moment);
			return { ...rested, state: 'answered', decision: null, isDecidedWithoutAnswer: false, isConsentAwaited: false };
		}
		default: {
			const next = withWhomItIs(verdict, flag.companyId, moment);
			if (next.isWith === flag.isWith) return rested;
			// It went from one to the other: what the contractor said was said of other figures.
			return { ...rested, ...next, state: 'open', answer: null, timeAsked: null };
		}
	}
}

function isStillClosed({ closedOn, decision, verdict, worstMm, isInsideAlone }: FlagLife): boolean {
	if (closedOn === 'concession') return decision?.kind === 'concession' && worstMm <= decision.limits.upToMm;
	return closedOn === 'taken-as-measured' && verdict !== 'outside' && isInsideAlone;
}
