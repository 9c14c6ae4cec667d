import type { Shelving } from '#shared/fit/contract.ts';
import type { NetworkOutlook } from '#shared/fit/network-schema.ts';
import { curedPairs } from '#shared/fit/shelved-input.ts';
import type { KnownMark, MarkSighting, SetupSightings } from '#shared/fit/start-setups.ts';
import { matchMarks } from '#shared/survey/match-marks.ts';
import type { SetupPairs } from './setup-pairs.ts';

type Read = Pick<SetupPairs, 'pairs' | 'unknown' | 'setupName' | 'levelling'>;

/** The marks that more than one of these set-ups saw: control points and targets that only tie. Names that differ in writing alone are one. */
export function tiesOf(read: readonly Read[]): NetworkOutlook['ties'] {
	const seen = new Map<string, { isKnown: boolean; setupIds: string[] }>();
	const add = (mark: string, isKnown: boolean, setupId: string): void => {
		const own = seen.get(mark) ?? { isKnown, setupIds: [] };
		if (!own.setupIds.includes(setupId)) own.setupIds.push(setupId);
		seen.set(mark, own);
	};
	const names = tieNames(read);
	for (const { pairs, unknown } of read) {
		for (const { name } of pairs.pairs) add(name, true, pairs.setupId);
		for (const { name } of unknown) add(names.get(name) ?? name, false, pairs.setupId);
	}
	return [...seen].flatMap(([mark, own]) => (own.setupIds.length > 1 ? [{ mark, ...own }] : [])).sort((a, b) => (a.mark < b.mark ? -1 : 1));
}

/** What each unknown target is called in the adjustment: as the first set-up that saw it wrote it. */
function tieNames(read: readonly Read[]): Map<string, string> {
	const names = new Map<string, string>();
	const canonical: string[] = [];
	for (const { unknown } of read) {
		const own = unknown.map(({ name }) => name);
		const matches = matchMarks(own, canonical);
		for (const name of own) {
			const mark = matches.get(name)?.mark ?? name.trim();
			names.set(name, mark);
			if (!canonical.includes(mark)) canonical.push(mark);
		}
	}
	return names;
}

/**
 * What is adjusted: every set-up's targets as they lie on their shelves, and the control they mean. A control point is taken as the list gives
 * it; used in plan or in level only is what the set-up's sighting of it then is.
 */
export function networkInput(
	read: readonly Read[],
	shelves: readonly (readonly Shelving[])[],
): { setups: SetupSightings[]; known: KnownMark[] } {
	const names = tieNames(read);
	const known = new Map<string, KnownMark>();
	const setups = read.map(({ pairs, unknown, setupName, levelling }, index): SetupSightings => {
		for (const { name, control, controlSigma } of pairs.pairs)
			if (controlSigma) known.set(name, { mark: name, control, sigma: controlSigma });
		const cured = curedPairs(pairs.pairs, levelling, shelves[index] ?? []).flatMap(({ pair, shelf, use, isLeftOut }): MarkSighting[] => {
			const { name: mark, survey, surveySigma: sigma } = pair;
			if (shelf === 'set-aside' || isLeftOut || sigma === undefined) return [];
			const [x, y, z] = survey;
			if (x === null || y === null || z === null) return [];
			return [{ mark, survey: [x, y, z], sigma, use, isHeldBack: shelf === 'held-back' }];
		});
		const ties = unknown.flatMap(({ name, surveyM, sigmaM }): MarkSighting[] =>
			sigmaM === null ? [] : [{ mark: names.get(name) ?? name, survey: surveyM, sigma: sigmaM }],
		);
		return { name: setupName, fit: levelling, sightings: [...cured, ...ties] };
	});
	return { setups, known: [...known.values()] };
}
