import { normalCdf, twoSidedNormal } from '../geometry/normal-distribution.ts';
import type { Finding } from './fit-schema.ts';

/** One sight of a target, survey frame, metres; `sigmaM` of this one sight, null where none is known. */
export interface TargetSight {
	/** The mark that it means: sights of one name are sights of one mark. */
	name: string;
	/** Line of the file; sights are taken in this order. */
	row: number;
	surveyM: readonly [number, number, number];
	sigmaM: readonly [number, number, number] | null;
}

/** What a moved set-up shows at one target. */
export interface MovedEvidence {
	/** Last sight minus first along the axis that is worst against its limit. */
	differenceMm: number;
	limitMm: number;
	axis: 'x' | 'y' | 'z';
	firstRow: number;
	lastRow: number;
	/** Up to here the set-up is shown to stand as it stood: the opening round, or the last sight of a target that still agreed. */
	lastGoodRow: number;
	/** False where no σ is known and the usual limit of 3 mm is taken. */
	isBySigma: boolean;
}

export interface MovedSetupFinding extends Finding {
	code: 'moved-setup';
	evidence: MovedEvidence & Record<string, unknown>;
}

/** A closing sight that is further off than this voids the work since the last good one, where nobody knows σ (common practice). */
const limitWithoutSigmaM = 0.003;
/** Three standard deviations, on one axis of one target alone. */
const fewestSigmas = 3;
const axisNames = ['x', 'y', 'z'] as const;

/**
 * Whether the instrument moved: targets sighted again in one set-up, the first sight held against the last in the order of the file.
 * A difference of two sights has the variance of both, so that along each axis it is held against k·√(σ₁² + σ₂²), which is k·σ·√2 for
 * equal sights, with k at least 3. More than one axis is looked at: k is raised (Šidák) until all of them together have no more chance
 * of a false alarm than one axis has at three standard deviations, 0.27 %. Without σ the limit is 3 mm on each axis, which is said.
 *
 * One finding for each target that is off, the worst against its limit first. Metres in, millimetres in the evidence.
 * Source of the family bound: Šidák (1967), J. Am. Stat. Assoc. 62.
 */
export function movedSetupFindings(sights: readonly TargetSight[]): MovedSetupFinding[] {
	const ordered = [...sights].sort((one, other) => one.row - other.row);
	const byName = new Map<string, TargetSight[]>();
	for (const sight of ordered) byName.set(sight.name, [...(byName.get(sight.name) ?? []), sight]);
	const repeated = [...byName.values()].filter((own) => own.length > 1);
	if (repeated.length === 0) return [];
	const sigmas = sigmasFor(3 * repeated.length);
	const compared = repeated.flatMap(([first, ...later]) =>
		first === undefined ? [] : later.map((again) => ({ first, again, worst: worstAxis(first, again, sigmas) })),
	);
	const firstOffRow = Math.min(...compared.flatMap(({ again, worst }) => (worst.share > 1 ? [again.row] : [])));
	const lastAgreeingRow = Math.max(
		...compared.flatMap(({ again, worst }) => (worst.share <= 1 && again.row < firstOffRow ? [again.row] : [])),
	);
	const lastGoodRow = Math.max(openingRow(ordered, firstOffRow), lastAgreeingRow);
	return repeated
		.flatMap((own) => {
			const [first, last] = [own[0], own.at(-1)];
			if (first === undefined || last === undefined) return [];
			const worst = worstAxis(first, last, sigmas);
			return worst.share > 1 ? [{ worst, finding: findingOf(first, last, worst, lastGoodRow) }] : [];
		})
		.sort((one, other) => other.worst.share - one.worst.share)
		.map(({ finding }) => finding);
}

interface WorstAxis {
	axis: 0 | 1 | 2;
	differenceM: number;
	limitM: number;
	/** |difference| / limit; over 1 is off. */
	share: number;
	isBySigma: boolean;
}

function worstAxis(first: TargetSight, last: TargetSight, sigmas: number): WorstAxis {
	const all = ([0, 1, 2] as const).map((axis): WorstAxis => {
		const differenceM = last.surveyM[axis] - first.surveyM[axis];
		const sigmaM = first.sigmaM === null || last.sigmaM === null ? 0 : Math.hypot(first.sigmaM[axis], last.sigmaM[axis]);
		// σ of nought says that nothing is known, not that nothing can be off.
		const isBySigma = sigmaM > 0;
		const limitM = isBySigma ? sigmas * sigmaM : limitWithoutSigmaM;
		return { axis, differenceM, limitM, share: Math.abs(differenceM) / limitM, isBySigma };
	});
	return all.reduce((worst, one) => (one.share > worst.share ? one : worst));
}

/** How many standard deviations, so that this many axes together cry wolf no oftener than one does at three. */
function sigmasFor(axisCount: number): number {
	const falseAlarm = 2 * normalCdf(-fewestSigmas);
	// 1 − (1 − α)^(1/m), without the loss of digits for small α.
	const each = -Math.expm1(Math.log1p(-falseAlarm) / axisCount);
	return Math.max(fewestSigmas, twoSidedNormal(each));
}

/** The end of the first unbroken run of target sights: the round that the set-up begins with. */
function openingRow(ordered: readonly TargetSight[], firstOffRow: number): number {
	let row = ordered[0]?.row ?? 0;
	for (const sight of ordered.slice(1)) {
		if (sight.row !== row + 1 || sight.row >= firstOffRow) break;
		row = sight.row;
	}
	return row;
}

function findingOf(first: TargetSight, last: TargetSight, worst: WorstAxis, lastGoodRow: number): MovedSetupFinding {
	const { axis, differenceM, limitM, isBySigma } = worst;
	const [differenceMm, limitMm] = [differenceM * 1000, limitM * 1000];
	const limit = isBySigma ? `${limitMm.toFixed(1)} mm can be chance` : `no σ is known, so ${limitMm.toFixed(0)} mm is the limit`;
	return {
		code: 'moved-setup',
		pairs: [first.name],
		message: `${first.name} came back ${millimetres(differenceMm)} off along ${axisNames[axis]} when it was sighted again (row ${last.row} against row ${first.row}; ${limit}): did the instrument move?`,
		evidence: { differenceMm, limitMm, axis: axisNames[axis], firstRow: first.row, lastRow: last.row, lastGoodRow, isBySigma },
	};
}

function millimetres(valueMm: number): string {
	const size = Math.abs(valueMm);
	return size >= 1000 ? `${(size / 1000).toFixed(3)} m` : `${size.toFixed(1)} mm`;
}
