import { type FitObservations, pickPairs } from './fit-observations.ts';
import { type FitTrial, tryFit } from './fit-trial.ts';
import { isLevelled, isScaled, leastPairs } from './least-pairs.ts';
import { spreadOf } from './spread.ts';

/** Mistakes that spoil every coordinate alike: other units, columns exchanged. */

/** Metres a unit. International foot 0.3048 m (1959), US survey foot 1200/3937 m. */
const unitMetres = { mm: 0.001, cm: 0.01, in: 0.0254, ft: 0.3048, ftUS: 1200 / 3937, m: 1 } as const;
export type LengthUnit = keyof typeof unitMetres;

export interface UnitRatio {
	/** The unit of the survey numbers, and of the control numbers. */
	from: LengthUnit;
	to: LengthUnit;
	/** Control numbers over survey numbers. */
	ratio: number;
}

/** A measured ratio counts as that of two units within this share: a grid factor may be on top. */
const RATIO_SHARE = 6e-4;
/** A mistake must make the residuals this many times smaller, and they must have been this share of the span. */
const GAIN = 20;
const GROSS_SHARE = 1e-3;

/**
 * The pairs of units that explain the scale between survey and control; several where ft and ftUS cannot be told apart. Empty where the scale is near 1
 * or no ratio of units.
 */
export function unitRatios(base: FitTrial): UnitRatio[] {
	const { observations } = base;
	if (observations.kind === 'height') return [];
	const scaled = isScaled(observations.kind) ? base : scaledTrial(observations);
	if (!scaled) return [];
	const scale = scaled.adjustment.pose.planScale;
	if (Math.abs(Math.log(scale)) < 0.1) return [];
	if (scaled !== base && !(rootMeanSquare(scaled) < rootMeanSquare(base) / GAIN)) return [];
	const scaleSigma = scaleDeviation(scaled);
	const candidates: (UnitRatio & { miss: number })[] = [];
	for (const from of Object.keys(unitMetres) as LengthUnit[]) {
		for (const to of Object.keys(unitMetres) as LengthUnit[]) {
			const ratio = unitMetres[from] / unitMetres[to];
			const miss = Math.abs(Math.log(scale / ratio));
			if (miss < RATIO_SHARE + 4 * scaleSigma) candidates.push({ from, to, ratio, miss });
		}
	}
	candidates.sort((a, b) => a.miss - b.miss);
	// Of the two feet the further one stays where it is not five σ of the scale further.
	const least = candidates[0]?.miss ?? 0;
	return candidates.filter(({ miss }) => miss - least < Math.max(5 * scaleSigma, 1e-9)).map(({ from, to, ratio }) => ({ from, to, ratio }));
}

function scaledTrial(observations: FitObservations): FitTrial | null {
	return tryFit({ ...observations, kind: isLevelled(observations.kind) ? 'levelled-scaled' : 'free-scaled', scalesHeights: true });
}

/** σ of the relative scale, with σ̂₀ where it is over 1 or no σ were given. */
function scaleDeviation({ adjustment, objective, redundancy, observations }: FitTrial): number {
	const variance = adjustment.cofactor.at(-1)!;
	const factor = redundancy > 0 ? objective / redundancy : 1;
	return Math.sqrt(variance * (observations.sigmaGiven ? Math.max(factor, 1) : factor));
}

export type AxisMistake =
	| 'east-north-exchanged'
	| 'axis-turned-round'
	| 'level-turned-round'
	| 'first-and-level-exchanged'
	| 'second-and-level-exchanged';

/** Signed permutations of the survey axes, rows of what each new axis is made of, that a fit of this kind cannot make up for itself. */
const levelledMistakes: readonly (readonly [AxisMistake, readonly number[]])[] = [
	['east-north-exchanged', [0, 1, 0, 1, 0, 0, 0, 0, 1]],
	['level-turned-round', [1, 0, 0, 0, 1, 0, 0, 0, -1]],
	['first-and-level-exchanged', [0, 0, 1, 0, 1, 0, 1, 0, 0]],
	['second-and-level-exchanged', [1, 0, 0, 0, 0, 1, 0, 1, 0]],
];
/** All reflections are one to a free fit: it turns one into another. */
const freeMistakes: readonly (readonly [AxisMistake, readonly number[]])[] = [['axis-turned-round', [1, 0, 0, 0, 1, 0, 0, 0, -1]]];

/** Exchanges and turns of axes under which the pairs agree while they do not as they are. More than one where they do it equally well. */
export function axisMistakes(base: FitTrial): AxisMistake[] {
	const { observations } = base;
	if (observations.kind === 'height' || observations.count <= leastPairs(observations.kind)) return [];
	const rms = rootMeanSquare(base);
	if (!(rms > GROSS_SHARE * spreadOf(observations.control, observations.count).extents[0])) return [];
	const found: { mistake: AxisMistake; rms: number }[] = [];
	for (const [mistake, axes] of isLevelled(observations.kind) ? levelledMistakes : freeMistakes) {
		const trial = tryFit(permuteAxes(observations, axes));
		if (!trial) continue;
		const better = rootMeanSquare(trial);
		if (better < rms / GAIN && (trial.passes || better < rms / GAIN ** 2)) found.push({ mistake, rms: better });
	}
	const least = Math.min(...found.map((one) => one.rms));
	return found.filter((one) => one.rms < 3 * least).map(({ mistake }) => mistake);
}

function permuteAxes(observations: FitObservations, axes: readonly number[]): FitObservations {
	const all = pickPairs(
		observations,
		Array.from({ length: observations.count }, (_, i) => i),
	);
	for (let at = 0; at < all.survey.length; at += 3) {
		for (let k = 0; k < 3; k++) {
			let value = 0;
			let variance = 0;
			for (let l = 0; l < 3; l++) {
				value += axes[3 * k + l]! * observations.survey[at + l]!;
				variance += axes[3 * k + l]! ** 2 * observations.surveyVariance[at + l]!;
			}
			all.survey[at + k] = value;
			all.surveyVariance[at + k] = variance;
		}
	}
	return all;
}

/** Of the residual lengths, metres. */
export function rootMeanSquare({ adjustment, observations }: FitTrial): number {
	let square = 0;
	for (const value of adjustment.equations.residual) square += value * value;
	return Math.sqrt(square / observations.count);
}
