import { limitText } from '../tolerance/millimetre-text.ts';
import type { FlagAnswer, FlagDecision } from './flag-schema.ts';

/** What was said in a few words, and the text beside it. */
export interface SaidWords {
	readonly words: string;
	readonly text: string | null;
}

const dayOf = (at: Date): string => at.toISOString().slice(0, 10);

/** An answer of the contractor's: "Will put it right: rework, by 2026-12-05". */
export function answerWords(answer: FlagAnswer): SaidWords {
	switch (answer.kind) {
		case 'put-right':
			return { words: `Will put it right: ${answer.means}, by ${dayOf(answer.by)}`, text: answer.how };
		case 'concession':
			return { words: 'Asks for a concession', text: answer.why };
		case 'contest':
			return { words: `Contests the measurement${answer.ownSurveyId === null ? '' : ', with points of its own'}`, text: answer.why };
	}
}

/** A decision of the project engineer's: "Concession: up to 18 mm, this face". */
export function decisionWords(decision: FlagDecision, isWithoutAnswer: boolean): SaidWords {
	const after = isWithoutAnswer ? '; decided after the deadline, without an answer' : '';
	const by = 'by' in decision && decision.by !== null ? `, by ${dayOf(decision.by)}` : '';
	switch (decision.kind) {
		case 'rework':
			return { words: `Rework${by}${after}`, text: decision.reason };
		case 'repair':
			return { words: `Repair${by}${after}`, text: decision.reason };
		case 'reject-and-replace':
			return { words: `Reject and replace${by}${after}`, text: decision.reason };
		case 'survey-again': {
			const sigma = decision.sigmaMm === null ? '' : `, σ ${limitText(decision.sigmaMm)} mm needed`;
			return { words: `Survey again${sigma}`, text: decision.reason };
		}
		case 'taken-as-measured':
			return { words: 'Taken as measured', text: decision.reason };
		case 'concession': {
			const { upToMm, extent, number, until, use } = decision.limits;
			const limits = [
				`up to ${limitText(upToMm)} mm`,
				extent,
				...(number === null ? [] : [`${number} of them`]),
				...(until === null ? [] : [`until ${dayOf(until)}`]),
				...(use === null ? [] : [use]),
			];
			const conditions = decision.conditions === null ? '' : ` Conditions: ${decision.conditions}`;
			return { words: `Concession: ${limits.join(', ')}${after}`, text: `${decision.reason}${conditions}` };
		}
	}
}
