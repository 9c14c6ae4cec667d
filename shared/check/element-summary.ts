import { plainMm } from '../tolerance/millimetre-text.ts';
import type { Deviation } from './check-schema.ts';
import type { DerivedRow } from './derived/derived-row.ts';
import { directionWords } from './direction-words.ts';
import { decimalsFor } from './sentence.ts';

type Part = Pick<
	Deviation,
	'characteristic' | 'place' | 'direction' | 'deviationMm' | 'offsetMm' | 'setupId' | 'expandedUncertaintyMm' | 'standardUncertaintyPartsMm'
>;
interface Measured {
	readonly place: Part['place'];
	readonly direction: Part['direction'];
	readonly deviationMm: number;
	readonly offsetMm: Part['offsetMm'];
	readonly setupId: string | null;
	readonly expandedMm: number;
	/** Without the common part, which cancels in differences within one set-up. */
	readonly ownMm: number;
	readonly commonMm: number;
}

function measuredOf(deviations: readonly Part[], characteristic: Part['characteristic']): Measured[] {
	return deviations.flatMap((deviation) => {
		const parts = deviation.standardUncertaintyPartsMm;
		if (
			deviation.characteristic !== characteristic ||
			deviation.deviationMm === null ||
			deviation.expandedUncertaintyMm === null ||
			parts === null
		)
			return [];
		const { place, direction, deviationMm, offsetMm, setupId, expandedUncertaintyMm } = deviation;
		return [
			{
				place,
				direction,
				deviationMm,
				offsetMm,
				setupId,
				expandedMm: expandedUncertaintyMm,
				ownMm: Math.hypot(parts.fit ?? 0, parts.point ?? 0),
				commonMm: parts.common,
			},
		];
	});
}

const mean = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;

/** "north-east" of a direction in plan, to the nearest of eight. */
function compassWord([east, north]: readonly [number, number]): string {
	const eighth = Math.round((Math.atan2(north, east) * 4) / Math.PI);
	return ['west', 'south-west', 'south', 'south-east', 'east', 'north-east', 'north', 'north-west', 'west'][eighth + 4]!;
}

/** Where an upright element stands at one height: how far along an axis, from the faces that look along it or against it. */
function shiftAlong(
	faces: readonly Measured[],
	axis: readonly [number, number],
): { mm: number; ownMm: number; commonMm: number; sides: number } | null {
	const sides = [1, -1].map((side) =>
		faces.filter(({ direction }) => direction !== null && side * (direction[0] * axis[0] + direction[1] * axis[1]) > 0.9),
	);
	const seen = sides.flatMap((side, index) =>
		side.length === 0 ? [] : [{ mm: (index === 0 ? 1 : -1) * mean(side.map(({ deviationMm }) => deviationMm)), all: side }],
	);
	if (seen.length === 0) return null;
	const all = seen.flatMap((side) => side.all);
	return {
		mm: mean(seen.map(({ mm }) => mm)),
		ownMm: Math.max(...all.map(({ ownMm }) => ownMm)),
		commonMm: Math.max(...all.map(({ commonMm }) => commonMm)),
		sides: seen.length,
	};
}

/**
 * "leans east, 23 at the top": the faces near the top stand further over than those near the bottom by more than U of the difference.
 * U is taken as if the fit's share were independent at both heights, which is more than it is: nothing is claimed that could be the fit.
 */
function leanWords(faces: readonly Measured[]): string | null {
	const upright = faces.filter(({ direction }) => direction !== null && Math.abs(direction[2]) < 0.3);
	if (upright.length < 2) return null;
	const heights = upright.map(({ place }) => place[2]);
	const [low, high] = [Math.min(...heights), Math.max(...heights)];
	if (high - low < 0.5) return null;
	const bottom = upright.filter(({ place }) => place[2] < low + (high - low) / 3);
	const top = upright.filter(({ place }) => place[2] > high - (high - low) / 3);
	const [e, n] = upright[0]!.direction!;
	const length = Math.hypot(e, n);
	const isOneSetup = new Set(upright.map(({ setupId }) => setupId)).size === 1;
	const over: [number, number] = [0, 0];
	let uncertaintyMm = 0;
	for (const axis of [
		[e / length, n / length],
		[-n / length, e / length],
	] as const) {
		const [below, above] = [shiftAlong(bottom, axis), shiftAlong(top, axis)];
		if (below === null || above === null || below.sides !== above.sides) continue;
		const common = isOneSetup ? 0 : Math.hypot(below.commonMm, above.commonMm);
		const differenceMm = 2 * Math.hypot(below.ownMm, above.ownMm, common);
		const topMm = 2 * Math.hypot(above.ownMm, above.commonMm);
		if (
			Math.abs(above.mm - below.mm) <= differenceMm ||
			Math.abs(above.mm) <= topMm ||
			Math.sign(above.mm) !== Math.sign(above.mm - below.mm)
		)
			continue;
		over[0] += above.mm * axis[0];
		over[1] += above.mm * axis[1];
		uncertaintyMm = Math.max(uncertaintyMm, topMm);
	}
	if (over[0] === 0 && over[1] === 0) return null;
	return `leans ${compassWord(over)}, ${plainMm(Math.hypot(...over), decimalsFor(uncertaintyMm))} at the top`;
}

/** "8 low": the mean of all, where all are the same way and it is beyond the largest U of them (as if all error were shared). */
function alikeWords(parts: readonly Measured[], plus: string, minus: string, all: string): string | null {
	if (parts.length === 0) return null;
	const average = mean(parts.map(({ deviationMm }) => deviationMm));
	const uncertaintyMm = Math.max(...parts.map(({ expandedMm }) => expandedMm));
	if (Math.abs(average) <= uncertaintyMm || parts.some(({ deviationMm }) => Math.sign(deviationMm) !== Math.sign(average))) return null;
	return `${plainMm(average, decimalsFor(uncertaintyMm))} ${average < 0 ? minus : plus}${parts.length > 1 ? all : ''}`;
}

/** "5 east, 2 south of its mark", for a group its shift and turn, each only where it is beyond U. */
function planWords(marks: readonly Measured[]): string | null {
	if (marks.length === 0) return null;
	const uncertaintyMm = Math.max(...marks.map(({ expandedMm }) => expandedMm));
	const decimals = decimalsFor(uncertaintyMm);
	const shift: [number, number] = [mean(marks.map(({ offsetMm }) => offsetMm![0])), mean(marks.map(({ offsetMm }) => offsetMm![1]))];
	const isShifted = Math.hypot(...shift) > uncertaintyMm;
	if (marks.length === 1) return isShifted ? `${directionWords(shift, decimals)} of its mark` : null;
	const middle = [0, 1].map((axis) => mean(marks.map(({ place }) => place[axis]!))) as [number, number];
	let moment = 0;
	let squares = 0;
	let radius = 0;
	for (const { place, offsetMm } of marks) {
		const [x, y] = [place[0] - middle[0], place[1] - middle[1]];
		moment += x * offsetMm![1] - y * offsetMm![0];
		squares += x * x + y * y;
		radius = Math.max(radius, Math.hypot(x, y));
	}
	// Turned by moment/squares (mrad): its u from independent u of each mark; what they share turns nothing.
	const turnMm = squares > 0 ? (moment / squares) * radius : 0;
	const turnUncertaintyMm = squares > 0 ? (2 * Math.max(...marks.map(({ ownMm }) => ownMm)) * radius) / Math.sqrt(squares) : Infinity;
	const phrases = [
		isShifted ? `the group ${directionWords(shift, decimals)} of its marks` : null,
		Math.abs(turnMm) > turnUncertaintyMm
			? `turned ${turnMm > 0 ? 'counter-clockwise' : 'clockwise'}, ${plainMm(turnMm, decimals)} at the outermost`
			: null,
	].filter((phrase) => phrase !== null);
	return phrases.length === 0 ? null : phrases.join(', ');
}

/** "leans 23 mm east", "section of 400 mm 16 mm too thick": of each kind the one furthest beyond its limits. */
function derivedWords(rows: readonly DerivedRow[]): string[] {
	const worst = new Map<string, DerivedRow>();
	for (const row of rows) {
		if (row.verdict !== 'outside') continue;
		const known = worst.get(row.characteristic);
		if (known === undefined || (row.beyondMm ?? 0) > (known.beyondMm ?? 0)) worst.set(row.characteristic, row);
	}
	// A label that begins with marks keeps its letters.
	const within = ({ characteristic, label }: DerivedRow): string =>
		/^(section|flatness)/.test(characteristic) ? `${label.charAt(0).toLowerCase()}${label.slice(1)}` : label;
	return [...worst.values()].map((row) => (row.characteristic === 'plumb' ? row.words : `${within(row)} ${row.words}`));
}

/**
 * What the deviations of one element say together, in a phrase: "leans east, 23 at the top", "8 low", "5 east, 2 south of its mark".
 * Only what is beyond U; null where nothing is. Millimetres. Deviations without a known U say nothing here. Of derived results the worst that is
 * outside of each kind is said, a plumb only where the faces do not say already which way the element leans.
 */
export function elementSummary(deviations: readonly Part[], derived: readonly DerivedRow[] = []): string | null {
	const faces = measuredOf(deviations, 'face');
	const lean = leanWords(faces);
	const phrases = [
		...derivedWords(derived.filter(({ characteristic }) => lean === null || characteristic !== 'plumb')),
		lean ?? alikeWords(faces, 'proud', 'shy', faces.length > 2 ? ' all round' : ''),
		planWords(measuredOf(deviations, 'plan').filter(({ offsetMm }) => offsetMm !== null)),
		alikeWords(measuredOf(deviations, 'level'), 'high', 'low', ' on average'),
	].filter((phrase) => phrase !== null);
	return phrases.length === 0 ? null : phrases.join('; ');
}
