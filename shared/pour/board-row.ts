import { counted } from '../check/name-list.ts';
import type { RecordedCheckpoint, ShownPour } from '../record/sealed-record.ts';
import type { HoldPointKind, HoldPointState, PourState } from './pour-life.ts';
import type { Readiness, ReadinessKind } from './readiness.ts';

/** solid: in order. half: in hand. open: nothing yet. */
export const stationStates = ['solid', 'half', 'open'] as const;
export type StationState = (typeof stationStates)[number];

/** What a pour's row on the board is told from, at the hold point in hand. */
export interface BoardFacts {
	readonly state: PourState;
	readonly point: HoldPointKind;
	readonly pointState: HoldPointState;
	readonly company: string;
	readonly readiness: Readiness;
	readonly shown: Pick<ShownPour, 'checkpoints' | 'flags'>;
	/** Why it is held; null: no hold stands. */
	readonly holdReasons: readonly string[] | null;
	/** The first deadline of the flags that wait for an answer. */
	readonly answerBy: Date | null;
	/** Who may release, by name. */
	readonly releasers: readonly string[];
	readonly submittedAt: Date | null;
	readonly calledBy: string | null;
	readonly signedBy: string | null;
	readonly signedAt: Date | null;
	/** Conditions of its release that are not met yet. */
	readonly openConditions: number;
}

/** Where a pour stands: eight stations, four before the concrete and four after it; where the plumb hangs; why, in a sentence. */
export interface BoardRow {
	stations: StationState[];
	/** The first station that is not in order; null: all are. */
	at: number | null;
	/** False: its figures rest on what is no longer the newest, or it is held. */
	isTaut: boolean;
	/** A sentence without full stop; what follows it as an hour stands in `moment`. */
	words: string;
	/** "since 08:10", "by Fri 5 Dec 17:00": the word, and the moment for the site's clock. */
	moment: { word: 'since' | 'by' | ''; at: Date } | null;
	/** The point furthest beyond, or nearest to, its limit. */
	worst: RecordedCheckpoint | null;
}

const staleKinds: readonly ReadinessKind[] = ['element-moved', 'fit-superseded', 'voided', 'limit-changed'];
const isReleased = (state: HoldPointState): boolean => state === 'released' || state === 'released-with-conditions';

/** A pour's row on the board. Pure: nothing but the facts, no clock. */
export function boardRowOf(facts: BoardFacts): BoardRow {
	const { point, pointState, readiness, holdReasons } = facts;
	const span = spanOf(facts);
	const before: StationState[] = point === 'after-pour' ? ['solid', 'solid', 'solid', 'solid'] : span;
	const after: StationState[] = point === 'after-pour' ? span : ['open', 'open', 'open', 'open'];
	const stations = [...before, ...after];
	const first = stations.findIndex((state) => state !== 'solid');
	const isStale = staleKinds.some((kind) => countOf(readiness, kind) > 0) || readiness.goneCount > 0;
	// Released and cast later: what became newer is noted; it makes no signed span slack.
	const isTaut = holdReasons === null && !(isStale && !isReleased(pointState));
	return { stations, at: first < 0 ? null : first, isTaut, ...reasonOf(facts, isStale), worst: worstOf(facts.shown.checkpoints) };
}

/** Surveyed, checked, flags, released. */
function spanOf({ readiness, pointState, shown: { flags }, holdReasons }: BoardFacts): StationState[] {
	if (isReleased(pointState) && holdReasons === null) return ['solid', 'solid', 'solid', 'solid'];
	const count = (...kinds: ReadinessKind[]) => kinds.reduce((sum, kind) => sum + countOf(readiness, kind), 0);
	const asked = readiness.askedCount;
	const unseen = count('not-measured');
	const surveyed: StationState = asked === 0 ? 'solid' : unseen === 0 ? 'solid' : unseen < asked ? 'half' : 'open';
	// Without anything to measure before the concrete nothing is in the way of the next station.
	const undecided = unseen + count('no-rule', 'undecided', 'fit-unchecked', ...staleKinds);
	const checked: StationState = undecided === 0 ? 'solid' : undecided < asked ? 'half' : 'open';
	const openFlags = flags.filter(({ state }) => state !== 'closed').length;
	const isOff = count('outside', 'close', 'flagged') > 0;
	const flagged: StationState = surveyed === 'solid' && checked === 'solid' && openFlags === 0 && !isOff ? 'solid' : 'open';
	return [surveyed, checked, flagged, 'open'];
}

function reasonOf(facts: BoardFacts, isStale: boolean): Pick<BoardRow, 'words' | 'moment'> {
	const { holdReasons, pointState, readiness, releasers, submittedAt, company, point, state } = facts;
	const say = (words: string, moment: BoardRow['moment'] = null) => ({ words, moment });
	const prefix = point === 'after-pour' ? 'After: ' : '';
	if (holdReasons !== null) return say(`Hold: ${withoutStop(holdReasons[0] ?? 'something touched it')}`);
	if (isReleased(pointState)) {
		const on = facts.openConditions > 0 ? `, ${counted(facts.openConditions, 'condition')} open` : '';
		const words =
			state === 'concreting' ? 'Concrete is being placed' : `${prefix}Released by ${facts.signedBy ?? 'the owner’s representative'}${on}`;
		return say(words, state === 'concreting' || facts.signedAt === null ? null : { word: '', at: facts.signedAt });
	}
	if (isStale) return say(prefix + withoutStop(firstBad(readiness, staleKinds) ?? 'It rests on what is no longer the newest: check again'));
	if (pointState === 'submitted')
		return say(
			`${prefix}${readiness.isReady ? 'Ready; waits' : 'No longer ready; waits'} for ${releasers.length === 0 ? 'the owner’s representative' : releasers.join(' or ')}`,
			submittedAt === null ? null : { word: 'since', at: submittedAt },
		);
	const openFlags = facts.shown.flags.filter(({ state: flagState }) => flagState !== 'closed');
	if (openFlags.length > 0) {
		const toAnswer = openFlags.filter(({ state: flagState }) => flagState === 'open').length;
		const putRight = openFlags.filter(({ state: flagState }) => flagState === 'put-right').length;
		if (toAnswer > 0 && facts.answerBy !== null)
			return say(`${prefix}${counted(openFlags.length, 'flag')}; ${company} to answer`, { word: 'by', at: facts.answerBy });
		if (putRight === openFlags.length) return say(`${prefix}${counted(putRight, 'flag')} put right, to be measured`);
		return say(`${prefix}${counted(openFlags.length, 'flag')} with the engineers`);
	}
	if (!readiness.isReady) {
		if (readiness.askedCount > 0 && countOf(readiness, 'not-measured') === readiness.askedCount) return say(`${prefix}No survey yet`);
		return say(prefix + withoutStop(readiness.sentences.find(({ isGood }) => !isGood)?.text ?? 'Not ready'));
	}
	if (pointState === 'refused') return say(`${prefix}Refused by ${facts.signedBy ?? 'the owner’s representative'}`);
	if (pointState === 'more-asked') return say(`${prefix}Ready; more is asked for`);
	if (pointState === 'called') return say(`${prefix}Ready, called by ${facts.calledBy ?? company}; to be submitted`);
	return say(`${prefix}Ready; ${company} to call it`);
}

function firstBad(readiness: Readiness, kinds: readonly ReadinessKind[]): string | undefined {
	return readiness.sentences.find(({ kind, isGood }) => !isGood && (kind === null || kinds.includes(kind)))?.text;
}

function countOf({ counts }: Readiness, kind: ReadinessKind): number {
	return counts[kind] ?? 0;
}

function withoutStop(text: string): string {
	return text.replace(/\.$/, '');
}

/** The largest share of its own limits. */
function worstOf(checkpoints: readonly RecordedCheckpoint[]): RecordedCheckpoint | null {
	let worst: RecordedCheckpoint | null = null;
	let most = -1;
	for (const checkpoint of checkpoints) {
		const share = shareOf(checkpoint);
		if (share > most) [worst, most] = [checkpoint, share];
	}
	return worst;
}

function shareOf({ deviationMm, limitsMm }: RecordedCheckpoint): number {
	if (deviationMm === null || limitsMm === null) return -1;
	const limit = deviationMm < 0 ? limitsMm[0] : limitsMm[1];
	return limit === null || limit === 0 ? (deviationMm === 0 ? 0 : Math.abs(deviationMm)) : deviationMm / limit;
}
