import { counted, nameList } from '../check/name-list.ts';
import type { CheckpointStanding } from '../check/standing.ts';
import type { FlagState } from '../flag/flag-schema.ts';
import type { Requirement } from '../model/requirement.ts';
import type { Characteristic } from '../tolerance/sheet-schema.ts';

/** One checkpoint of the pour's elements as it stands for this hold point. */
export interface PourCheckpoint {
	readonly modelId: string;
	readonly globalId: string;
	readonly checkpointId: string;
	readonly characteristic: Characteristic;
	/** What people call its element. */
	readonly mark: string;
	readonly requirement: Requirement;
	/** The concrete itself makes it, so that this hold point, before the pour, does not ask for it. */
	readonly isAfterConcrete: boolean;
	/** From all published checks of the point's stages; null where none asked for it. */
	readonly standing: CheckpointStanding | null;
	/** Its survey point was voided after the check. */
	readonly isVoided: boolean;
	/** The issued sheet gives it other limits than those it was judged by. */
	readonly isLimitChanged: boolean;
	/** The element stands elsewhere, or is shaped otherwise, in the newest revision than in the one checked. */
	readonly isDesignMoved: boolean;
}

/** A flag that has not lapsed. */
export interface PourFlag {
	readonly modelId: string;
	readonly globalId: string;
	readonly kind: Characteristic;
	readonly state: FlagState;
}

export interface ReadinessFacts {
	readonly checkpoints: readonly PourCheckpoint[];
	readonly flags: readonly PourFlag[];
	/** Elements of the pour that the newest revision does not have any more. */
	readonly goneMarks: readonly string[];
	/** Another person than who adopts a fit checks it, on this site. */
	readonly isFitCheckedBySecond: boolean;
}

/** `isGood`: it does not stand in the way. */
export interface ReadinessSentence {
	/** What it counts; null: it is of the pour as a whole. */
	readonly kind: ReadinessKind | null;
	readonly text: string;
	readonly isGood: boolean;
}

export interface Readiness {
	readonly isReady: boolean;
	readonly sentences: readonly ReadinessSentence[];
	/** How many points are of each kind. */
	readonly counts: Readonly<Partial<Record<ReadinessKind, number>>>;
	/** Points that this hold point asks for: neither left out nor the concrete's own. */
	readonly askedCount: number;
	/** Elements that the newest revision does not have. */
	readonly goneCount: number;
}

/** What one checkpoint comes to: `good` kinds let the pour go, the others stand in the way. */
const kinds = {
	'element-moved': {
		isGood: false,
		say: (n: string, marks: string) => `${n} on elements that the newest revision moves or reshapes (${marks}): check again.`,
	},
	'not-measured': {
		isGood: false,
		say: (n: string, marks: string) => `${n} not measured (${marks}): measure them, or leave them out with a reason.`,
	},
	'fit-superseded': {
		isGood: false,
		say: (n: string, marks: string) => `${n} measured on a fit that is adopted no more (${marks}): check again.`,
	},
	'fit-unchecked': { isGood: false, say: (n: string, marks: string) => `${n} on a fit that no second person has checked (${marks}).` },
	voided: {
		isGood: false,
		say: (n: string, marks: string) => `${n} measured by a survey point that was voided since (${marks}): check again.`,
	},
	'limit-changed': {
		isGood: false,
		say: (n: string, marks: string) => `${n} with other limits by the issued sheet (${marks}): check again.`,
	},
	'no-rule': {
		isGood: false,
		say: (n: string, marks: string) => `${n} that no rule decides (${marks}): give them a limit, or leave them out with a reason.`,
	},
	outside: { isGood: false, say: (n: string, marks: string) => `${n} outside, their flags not closed (${marks}).` },
	close: { isGood: false, say: (n: string, marks: string) => `${n} too close to call, their flags not closed (${marks}).` },
	undecided: { isGood: false, say: (n: string, marks: string) => `${n} undecided: their uncertainty is not known (${marks}).` },
	flagged: { isGood: false, say: (n: string, marks: string) => `${n} within, their flags not closed yet (${marks}).` },
	within: { isGood: true, say: (n: string) => `${n} within, on adopted fits.` },
	'flag-closed': { isGood: true, say: (n: string, marks: string) => `${n} outside or too close, their flags closed (${marks}).` },
	'left-out': { isGood: true, say: (n: string, marks: string) => `${n} left out, each with its reason (${marks}).` },
	'after-concrete': {
		isGood: true,
		say: (n: string, marks: string) => `${n} not asked for here: the concrete's own tops are measured after it (${marks}).`,
	},
} as const;
export type ReadinessKind = keyof typeof kinds;

/**
 * Why a pour is ready or not, sentence by sentence: every required and sampled checkpoint is within, or its flag is closed; what is not
 * measured or has no rule stands in the way unless it is left out with a reason; on checked, adopted fits. What the concrete itself makes is
 * not asked for before it.
 */
export function readinessOf(facts: ReadinessFacts): Readiness {
	const flagsOf = flagsByPlace(facts.flags);
	const byKind = new Map<ReadinessKind, PourCheckpoint[]>();
	for (const checkpoint of facts.checkpoints) {
		const kind = kindOf(checkpoint, flagsOf.get(placeKey(checkpoint, checkpoint.characteristic)) ?? [], facts.isFitCheckedBySecond);
		const found = byKind.get(kind);
		if (found === undefined) byKind.set(kind, [checkpoint]);
		else found.push(checkpoint);
	}
	const sentences = (Object.keys(kinds) as ReadinessKind[]).flatMap((kind): ReadinessSentence[] => {
		const found = byKind.get(kind);
		if (found === undefined) return [];
		const marks = nameList([...new Set(found.map(({ mark }) => mark))]);
		return [{ kind, text: kinds[kind].say(counted(found.length, 'point'), marks), isGood: kinds[kind].isGood }];
	});
	if (facts.goneMarks.length > 0)
		sentences.unshift({
			kind: null,
			text: `${counted(facts.goneMarks.length, 'element')} no longer in the newest revision (${nameList(facts.goneMarks)}).`,
			isGood: false,
		});
	const asked = facts.checkpoints.filter(({ isAfterConcrete }) => !isAfterConcrete);
	if (facts.checkpoints.length === 0)
		sentences.unshift({ kind: null, text: 'There is no point to measure on the elements of this pour.', isGood: false });
	else if (asked.length === 0)
		sentences.unshift({
			kind: null,
			text: 'Nothing of it can be measured before the concrete: this hold point rests on its list alone.',
			isGood: true,
		});
	else if (asked.every(({ requirement }) => requirement === 'left-out'))
		sentences.unshift({ kind: null, text: 'Every point is left out, so nothing is known of this pour.', isGood: false });
	const counts = Object.fromEntries([...byKind].map(([kind, { length }]) => [kind, length]));
	const askedCount = asked.filter(({ requirement }) => requirement !== 'left-out').length;
	return { isReady: sentences.every(({ isGood }) => isGood), sentences, counts, askedCount, goneCount: facts.goneMarks.length };
}

function placeKey({ modelId, globalId }: { modelId: string; globalId: string }, kind: Characteristic): string {
	return `${modelId} ${globalId} ${kind}`;
}

function flagsByPlace(flags: readonly PourFlag[]): Map<string, PourFlag[]> {
	const byPlace = new Map<string, PourFlag[]>();
	for (const flag of flags) {
		const key = placeKey(flag, flag.kind);
		const found = byPlace.get(key);
		if (found === undefined) byPlace.set(key, [flag]);
		else found.push(flag);
	}
	return byPlace;
}

/** `own`: the flags of the checkpoint's element and kind. */
function kindOf(checkpoint: PourCheckpoint, own: readonly PourFlag[], isFitCheckedBySecond: boolean): ReadinessKind {
	const { requirement, standing } = checkpoint;
	if (checkpoint.isAfterConcrete) return 'after-concrete';
	if (requirement === 'left-out') return 'left-out';
	if (standing === null || standing.newest.deviation.deviationMm === null) return 'not-measured';
	const { deviation, isFitAdopted, isFitChecked } = standing.newest;
	if (checkpoint.isDesignMoved) return 'element-moved';
	if (!isFitAdopted) return 'fit-superseded';
	if (isFitCheckedBySecond && !isFitChecked) return 'fit-unchecked';
	if (checkpoint.isVoided) return 'voided';
	if (checkpoint.isLimitChanged) return 'limit-changed';
	if (deviation.verdict === 'no-tolerance') return 'no-rule';
	const isOpen = own.some(({ state }) => state !== 'closed' && state !== 'lapsed');
	if (deviation.verdict === 'within') return isOpen ? 'flagged' : 'within';
	if (!isOpen && own.some(({ state }) => state === 'closed')) return 'flag-closed';
	return deviation.verdict === 'outside' ? 'outside' : deviation.verdict === 'too-close-to-call' ? 'close' : 'undecided';
}
