import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckDetail } from '#shared/check/contract.ts';
import { counted } from '#src/lib/format.ts';

/** The stations of a pour's string: four before the concrete, four after it. */
export const stationWords = ['surveyed', 'checked', 'flags', 'released'] as const;

/** What is to come at each station. */
export const nextWords = ['to be surveyed', 'to be checked', 'flags to be settled', 'to be released'] as const;

export type StationState = 'solid' | 'half' | 'open';

/** Where a pour stands, as far as the newest check tells. */
export interface PourStanding {
	/** Eight: before, then after the concrete. */
	stations: readonly StationState[];
	/** The first that is not in order: the plumb hangs there. */
	at: number;
	/** False: the check stands on what is no longer the newest. */
	isTaut: boolean;
	/** Why, in a sentence without full stop. */
	words: string;
	/** The deviation furthest beyond, or nearest to, its limit. */
	worst: Deviation | null;
}

/** Reads a pour's standing off the newest check; without one nothing is surveyed. Pure. */
export function pourStanding(pourId: string, check: CheckDetail | null, isCheckTaut: boolean): PourStanding {
	const nothing: PourStanding = {
		stations: Array.from({ length: 8 }, () => 'open' as const),
		at: 0,
		isTaut: true,
		words: 'No survey yet',
		worst: null,
	};
	if (check === null) return nothing;
	const elements = new Set(check.elements.filter((element) => element.pourIds.includes(pourId)).map((element) => element.elementId));
	const deviations = check.deviations.filter((deviation) => elements.has(deviation.elementId));
	if (deviations.length === 0) return { ...nothing, words: `Not in check ${check.number}` };

	const measured = deviations.filter((deviation) => deviation.deviationMm !== null);
	const decided = measured.filter((deviation) => deviation.verdict === 'within' || deviation.verdict === 'outside');
	const surveyed: StationState = measured.length === 0 ? 'open' : measured.length === deviations.length ? 'solid' : 'half';
	const checked: StationState = decided.length === 0 ? 'open' : decided.length === deviations.length ? 'solid' : 'half';
	const span: StationState[] = [surveyed, checked, 'open', 'open'];
	const untouched: StationState[] = ['open', 'open', 'open', 'open'];
	const isBefore = check.stage === 'before-pour';
	const stations = isBefore ? [...span, ...untouched] : [...untouched, ...span];
	const first = stations.findIndex((state, index) => state !== 'solid' && (isBefore || index >= 4));
	return {
		stations,
		at: first < 0 ? 7 : first,
		isTaut: isCheckTaut,
		words: isCheckTaut
			? isBefore
				? standingWords(deviations)
				: `As cast: ${lowerFirst(standingWords(deviations))}`
			: `Check ${check.number} no longer stands on the newest: check again`,
		worst: worstOf(measured),
	};
}

function standingWords(deviations: readonly Deviation[]): string {
	const count = (...verdicts: Deviation['verdict'][]) => deviations.filter((deviation) => verdicts.includes(deviation.verdict)).length;
	const offElements = new Set(deviations.filter((deviation) => deviation.verdict === 'outside').map((deviation) => deviation.elementId))
		.size;
	const close = count('too-close-to-call', 'undecided');
	const unseen = count('not-measured');
	const lawless = count('no-tolerance');
	const words = [
		offElements && `${counted(offElements, 'element')} off`,
		close && `${counted(close, 'point')} too close`,
		unseen && `${unseen} not seen`,
		lawless && `${lawless} without a rule`,
	].filter((word) => typeof word === 'string');
	return words.length === 0 ? `All ${counted(deviations.length, 'point')} within` : words.join(', ');
}

function lowerFirst(text: string): string {
	return text.charAt(0).toLowerCase() + text.slice(1);
}

/** The largest share of its own limits. */
function worstOf(measured: readonly Deviation[]): Deviation | null {
	const share = ({ deviationMm, limitsMm }: Deviation): number => {
		if (deviationMm === null || limitsMm === null) return -1;
		const limit = deviationMm < 0 ? limitsMm[0] : limitsMm[1];
		return limit === null || limit === 0 ? (deviationMm === 0 ? 0 : Math.abs(deviationMm)) : deviationMm / limit;
	};
	return measured.reduce<Deviation | null>(
		(worst, deviation) => (worst === null || share(deviation) > share(worst) ? deviation : worst),
		null,
	);
}

/** What in the newest check belongs to no row: "In no pour", "No rule". */
export function homeless(check: CheckDetail): { words: string; why: string }[] {
	const loose = check.elements.filter((element) => element.pourIds.length === 0).length;
	const lawless = check.deviations.filter((deviation) => deviation.verdict === 'no-tolerance').length;
	return [
		...(loose > 0 ? [{ words: 'In no pour', why: counted(loose, 'element') }] : []),
		...(lawless > 0 ? [{ words: 'No rule', why: counted(lawless, 'point') }] : []),
	];
}
