import type { FlagLife } from '#shared/flag/flag-life.ts';
import type { flags } from '../../db/schema/flag.ts';

export type FlagRow = typeof flags.$inferSelect;

const millisecondsOf = (at: Date | null): number | null => at?.getTime() ?? null;
const dateOf = (ms: number | null): Date | null => (ms === null ? null : new Date(ms));

/** A stored flag as its life sees it. Dates within answers and decisions travel as text in jsonb and are dates again here. */
export function lifeOf(row: FlagRow): FlagLife {
	return {
		state: row.state,
		isWith: row.isWith,
		companyId: row.companyId,
		verdict: row.verdict,
		worstMm: row.worstMm,
		isInsideAlone: row.isInsideAlone,
		checkId: row.checkId,
		round: row.round,
		answerBy: millisecondsOf(row.answerBy),
		timeAsked: millisecondsOf(row.timeAsked),
		answer: answerOf(row.answer),
		decision: decisionOf(row.decision),
		isDecidedWithoutAnswer: row.isDecidedWithoutAnswer,
		isConsentAwaited: row.isConsentAwaited,
		closedOn: row.closedOn,
		lapsedBecause: row.lapsedBecause,
		putRightAt: millisecondsOf(row.putRightAt),
	};
}

/** What of a flag's life is stored. */
export function columnsOf(life: FlagLife) {
	return {
		...life,
		answerBy: dateOf(life.answerBy),
		timeAsked: dateOf(life.timeAsked),
		putRightAt: dateOf(life.putRightAt),
	};
}

export function answerOf(stored: FlagRow['answer']): FlagRow['answer'] {
	return stored?.kind === 'put-right' ? { ...stored, by: new Date(stored.by) } : stored;
}

export function decisionOf(stored: FlagRow['decision']): FlagRow['decision'] {
	if (stored === null) return null;
	if (stored.kind === 'concession') {
		const { until } = stored.limits;
		return { ...stored, limits: { ...stored.limits, until: until === null ? null : new Date(until) } };
	}
	return 'by' in stored && stored.by !== null ? { ...stored, by: new Date(stored.by) } : stored;
}
