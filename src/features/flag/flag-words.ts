import type { FlagSummary } from '#shared/flag/contract.ts';
import { isOverdue } from '#shared/flag/flag-life.ts';
import { decisionWords } from '#shared/flag/said-words.ts';
import { distanceInTime, moment, plainMm } from '#src/lib/format.ts';

/** "off by up to 34 mm"; of one that is too close to call only that. */
export function offWords({ verdict, worstMm }: Pick<FlagSummary, 'verdict' | 'worstMm'>): string {
	if (verdict === 'outside') return `up to ${plainMm(worstMm)} mm off its place`;
	return verdict === 'undecided' ? `${plainMm(worstMm)} mm, undecided` : `${plainMm(worstMm)} mm, too close to call`;
}

const answerWord = { 'put-right': 'will be put right', concession: 'asks for a concession', contest: 'contests the measurement' } as const;

/** Where a flag stands, in a few words. */
export function stateWords(flag: FlagSummary, now: Date): string {
	if (flag.state === 'open') {
		if (flag.isWith === 'engineers') return flag.verdict === 'outside' ? 'in no pour, with the engineers' : 'being measured again';
		return isOverdue({ state: flag.state, answerBy: flag.answerBy?.getTime() ?? null }, now.getTime())
			? 'no answer, overdue'
			: 'no answer yet';
	}
	if (flag.state === 'answered') return `answered: ${flag.answer === null ? '' : answerWord[flag.answer.kind]}`;
	if (flag.state === 'decided') {
		if (flag.isConsentAwaited) return 'concession, waits for the owner’s consent';
		return `decided: ${flag.decision === null ? '' : decisionWords(flag.decision, flag.isDecidedWithoutAnswer).words.toLowerCase()}`;
	}
	if (flag.state === 'put-right') return 'put right, ready to measure';
	if (flag.state === 'lapsed') return 'lapsed';
	return { 'check-within': 'closed: measured within', concession: 'closed: concession', 'taken-as-measured': 'closed: taken as measured' }[
		flag.closedOn ?? 'check-within'
	];
}

/** "by Fri 5 Dec 17:00, in 2 days"; empty where no clock runs. */
export function deadlineWords(flag: Pick<FlagSummary, 'state' | 'answerBy'>, timeZone: string, now: Date): string {
	if (flag.state !== 'open' || flag.answerBy === null) return '';
	return `by ${moment(flag.answerBy, timeZone, now)}, ${distanceInTime(flag.answerBy, now)}`;
}

/** What lists are narrowed to: what waits for whom. */
export const flagGroups = ['to answer', 'to decide', 'to consent', 'being measured again', 'decided', 'to measure', 'settled'] as const;
export type FlagGroup = (typeof flagGroups)[number];

/** The group a flag stands in at this moment: whose turn it is. */
export function groupOf(flag: FlagSummary, now: Date): FlagGroup {
	switch (flag.state) {
		case 'open':
			if (flag.isWith === 'engineers') return flag.verdict === 'outside' ? 'to decide' : 'being measured again';
			return isOverdue({ state: 'open', answerBy: flag.answerBy?.getTime() ?? null }, now.getTime()) ? 'to decide' : 'to answer';
		case 'answered':
			return 'to decide';
		case 'decided':
			if (flag.isConsentAwaited) return 'to consent';
			return flag.decision?.kind === 'survey-again' ? 'being measured again' : 'decided';
		case 'put-right':
			return 'to measure';
		default:
			return 'settled';
	}
}
