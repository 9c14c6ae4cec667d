import { computeFit } from '#shared/fit/compute-fit.ts';
import type { PairsOfSetup, Shelving } from '#shared/fit/contract.ts';
import type { Finding, FitKind, FitResult } from '#shared/fit/fit-schema.ts';
import { shelvedInput, takesParts } from '#shared/fit/shelved-input.ts';
import { type PairPlace, withExchange, withPlace } from './shelves-state.ts';

/** One press that tries to put right what a finding tells. */
export type Cure = { label: string; names: readonly string[] } & (
	| { act: 'put'; place: PairPlace }
	| { act: 'exchange'; names: readonly [string, string] }
);

/** One story of a finding with its presses; where several are as good each stands for itself. */
export interface CureStory {
	/** Null where the finding tells one story, its own. */
	title: string | null;
	cures: Cure[];
}

const setAside: PairPlace = { shelf: 'set-aside', use: 'all' };
const heldBack: PairPlace = { shelf: 'held-back', use: 'all' };
/** More stories than this are no help on a screen; the evidence names them all. */
const mostStories = 6;

/** The presses that fit a finding's code; none for what is cured elsewhere (units, columns, a factor to be typed in). */
export function curesOf({ code, pairs, evidence }: Finding, kind: FitKind): CureStory[] {
	if (pairs.length > 0) return [{ title: null, cures: curesFor(code, pairs, kind) }].filter(({ cures }) => cures.length > 0);
	const alternatives = Array.isArray(evidence.alternatives) ? evidence.alternatives : [];
	return alternatives
		.flatMap((alternative: unknown): CureStory[] => {
			const story = storyOf(alternative, code);
			return story === null ? [] : [{ title: storyTitle(story), cures: curesFor(story.code, story.pairs, kind) }];
		})
		.filter(({ cures }) => cures.length > 0)
		.slice(0, mostStories);
}

function curesFor(code: string, pairs: readonly string[], kind: FitKind): Cure[] {
	const names = listed(pairs);
	const aside: Cure = { act: 'put', label: `Set ${names} aside`, names: pairs, place: setAside };
	const hold: Cure = { act: 'put', label: `Hold ${names} back`, names: pairs, place: heldBack };
	const [a, b] = pairs;
	switch (code) {
		case 'swapped-labels':
			return a !== undefined && b !== undefined && pairs.length === 2
				? [{ act: 'exchange', label: `Exchange ${a} and ${b}`, names: [a, b] }, aside]
				: [aside];
		case 'target-height':
			return takesParts(kind)
				? [{ act: 'put', label: `Use ${names} in plan only`, names: pairs, place: { shelf: 'in-the-fit', use: 'plan' } }, aside]
				: [aside, hold];
		case 'one-axis':
			return takesParts(kind)
				? [aside, { act: 'put', label: `Use ${names} in level only`, names: pairs, place: { shelf: 'in-the-fit', use: 'level' } }]
				: [aside, hold];
		case 'blunder':
			return [aside, hold];
		default:
			return [];
	}
}

interface Story {
	code: string;
	pairs: string[];
}

/** An alternative is a list of names, or a code with its pairs; others have no press. */
function storyOf(alternative: unknown, code: string): Story | null {
	if (isNames(alternative)) return { code, pairs: alternative };
	if (typeof alternative !== 'object' || alternative === null || !('pairs' in alternative) || !isNames(alternative.pairs)) return null;
	const own = 'code' in alternative && typeof alternative.code === 'string' ? alternative.code : code;
	return { code: own, pairs: alternative.pairs };
}

function isNames(value: unknown): value is string[] {
	return Array.isArray(value) && value.length > 0 && value.every((name) => typeof name === 'string');
}

function storyTitle({ code, pairs }: Story): string {
	const names = listed(pairs);
	if (code === 'swapped-labels') return `Are the labels of ${names} exchanged?`;
	if (code === 'target-height') return `A wrong target height at ${names}?`;
	if (code === 'one-axis') return `A slip of the pen in one coordinate of ${names}?`;
	return `${pairs.length === 1 ? 'Is' : 'Are'} ${names} off?`;
}

/** The shelves once a cure is taken. */
export function withCure(shelves: readonly Shelving[], cure: Cure, reason: string): Shelving[] {
	return cure.act === 'exchange' ? withExchange(shelves, cure.names, reason) : withPlace(shelves, cure.names, cure.place, reason);
}

/** The three figures by which two fits of the same pairs are held against each other. */
export interface FitWorth {
	rmsM: number;
	varianceFactor: number | null;
	/** The worst normalised residual of a pair in the fit, and what it is held against. */
	worst: { normalised: number; critical: number; name: string } | null;
	sigmaGiven: boolean;
}

/** The figures of a fit. */
export function worthOf({ rms, varianceFactor, pairs, sigmaGiven = true }: FitResult): FitWorth {
	let worst: FitWorth['worst'] = null;
	for (const { name, normalised, critical, heldBack: isHeldBack } of pairs) {
		if (isHeldBack || normalised === null || critical === null) continue;
		if (worst === null || normalised > worst.normalised) worst = { normalised, critical, name };
	}
	return { rmsM: rms, varianceFactor, worst, sigmaGiven };
}

/** What the fit would be with a cure taken; null where there would be none. */
export function worthWith(
	cure: Cure,
	{
		pairs,
		kind,
		knownScale,
		shelves,
	}: { pairs: PairsOfSetup['pairs']; kind: FitKind; knownScale: number | null; shelves: readonly Shelving[] },
): FitWorth | null {
	const outcome = computeFit(shelvedInput(pairs, kind, knownScale, withCure(shelves, cure, 'tried')), { findings: false });
	return outcome.ok ? worthOf(outcome.result) : null;
}

/** "T1", "T1 and T2", "T1, T2 and T3". */
export function listed(names: readonly string[]): string {
	return names.length < 2 ? (names[0] ?? '') : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}
