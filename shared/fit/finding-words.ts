import type { Explanation } from './explanations.ts';
import { exchangeControl } from './explanations.ts';
import type { Finding } from './fit-schema.ts';
import type { FitTrial } from './fit-trial.ts';
import type { AxisMistake, UnitRatio } from './gross-mistakes.ts';
import { prediction } from './prediction.ts';
import type { EffectCode, SystematicEffect } from './systematic-effects.ts';

/** Findings in the words of the trade. Numbers of the evidence are in full; those of the message are rounded. */

/** Chi-square with 3 degrees at 0.1 %: a pair under it fits once its label is changed over. */
const EXCHANGE_LIMIT = 16.266;

const axisNames = ['easting', 'northing', 'level'] as const;

export function unitFinding(ratios: readonly UnitRatio[]): Finding {
	const [first] = ratios as [UnitRatio, ...UnitRatio[]];
	const words = ratios.map(({ from, to }) => `${from} against ${to}`).join(' or ');
	return {
		code: 'unit-ratio',
		pairs: [],
		message: `The control is ${first.ratio.toPrecision(7).replace(/\.?0+$/, '')} times the survey: the units differ, ${words}. Read the survey again in its own unit.`,
		evidence: ratios.length === 1 ? { ...first } : { ...first, alternatives: ratios.map((ratio) => ({ ...ratio })) },
	};
}

const mistakeWords: Record<AxisMistake, string> = {
	'east-north-exchanged': 'easting and northing are exchanged (or one of them turned round) on one side',
	'axis-turned-round': 'two columns are exchanged, or one axis turned round, on one side',
	'level-turned-round': 'the levels are turned round on one side (depths for heights)',
	'first-and-level-exchanged': 'the first column and the level are exchanged on one side',
	'second-and-level-exchanged': 'the second column and the level are exchanged on one side',
};

export function mirroredFinding(mistakes: readonly AxisMistake[]): Finding {
	return {
		code: 'mirrored-axes',
		pairs: [],
		message: `The pairs fit once ${mistakes.map((mistake) => mistakeWords[mistake]).join(', or ')}: check the order of the columns.`,
		evidence: mistakes.length === 1 ? { mistake: mistakes[0] } : { alternatives: mistakes },
	};
}

/** @param effects the best one first; others tell the residuals as well */
export function effectFinding(effects: readonly SystematicEffect[]): Finding {
	const [best] = effects as [SystematicEffect, ...SystematicEffect[]];
	const rival = effects.length > 1 ? ` ${effects.slice(1).map(effectWords).join(' ')} These pairs cannot tell one from the other.` : '';
	return {
		code: best.code,
		pairs: [],
		message: `${effectWords(best)}${rival}`,
		evidence:
			effects.length === 1
				? effectEvidence(best)
				: { ...effectEvidence(best), alternatives: effects.map((effect) => ({ code: effect.code, ...effectEvidence(effect) })) },
	};
}

function effectWords({ code, values }: SystematicEffect): string {
	if (code === 'grid-scale') {
		const ppm = values[0]! * 1e6;
		return `The control is ${Math.abs(ppm).toFixed(0)} ppm ${ppm > 0 ? 'larger' : 'smaller'} than the survey: a grid scale, or another unit of the distances. Enter the known factor; do not let it be fitted away.`;
	}
	if (code === 'not-plumb') {
		const { tiltRad, directionRad } = tiltOf(values);
		return `The instrument was not plumb: the levels tilt by ${((tiltRad * 180 * 3600) / Math.PI).toFixed(0)}″, rising towards bearing ${((directionRad * 180) / Math.PI).toFixed(0)}°.`;
	}
	const mm = values[0]! * 1000;
	return `The distances are ${Math.abs(mm).toFixed(1)} mm too ${mm > 0 ? 'long' : 'short'} on every ray: check the prism constant.`;
}

function effectEvidence({ code, values, sigmas, significance }: SystematicEffect): Record<string, unknown> {
	const shared = { significance };
	if (code === 'grid-scale') return { ppm: values[0]! * 1e6, sigmaPpm: sigmas[0]! * 1e6, ...shared };
	if (code === 'not-plumb') return { ...tiltOf(values), sigmaRad: Math.hypot(...sigmas) / Math.SQRT2, ...shared };
	return { metres: values[0]!, sigmaM: sigmas[0]!, ...shared };
}

/** Turns about E and N as a tilt and the bearing (clockwise from north) towards which the survey's levels must be raised to fit. */
function tiltOf([aboutEast, aboutNorth]: readonly number[]): { tiltRad: number; directionRad: number } {
	// A turn about E lifts north, a turn about N lowers east.
	const bearing = Math.atan2(-aboutNorth!, aboutEast!);
	return { tiltRad: Math.hypot(aboutEast!, aboutNorth!), directionRad: bearing < 0 ? bearing + 2 * Math.PI : bearing };
}

export function swapFinding(base: FitTrial, names: readonly string[], [a, b]: readonly [number, number]): Finding {
	return {
		code: 'swapped-labels',
		pairs: [names[a]!, names[b]!],
		message: `“${names[a]}” and “${names[b]}” look exchanged: with their labels changed over all pairs agree.`,
		evidence: { exchanged: [names[a], names[b]], agreeing: base.observations.count },
	};
}

/** No group of pairs agrees. */
export function contradictionFinding(base: FitTrial, names: readonly string[]): Finding {
	return {
		code: 'blunder',
		pairs: [],
		message:
			'The pairs contradict each other, and no group of them agrees well enough to say which is wrong: a gross error, or standard deviations that are too small.',
		evidence: { worst: base.worst, critical: base.critical, alternatives: names.map((name) => [name]) },
	};
}

/**
 * `swapped-labels`, `target-height`, `one-axis` for the pairs they tell best, `blunder` for all accused where those do not name them all.
 * @param openToDoubt name nobody: the stories stand side by side in `alternatives`
 */
export function accusationFindings(
	base: FitTrial,
	names: readonly string[],
	best: Explanation,
	rivals: readonly Explanation[],
	openToDoubt: boolean,
): Finding[] {
	if (openToDoubt) return [doubtfulFinding(names, best, rivals)];
	const exchanged = exchangedAmong(base, best);
	const left = best.accused.filter(({ pair }) => !exchanged.flat().includes(pair));
	const heights = left.filter(({ axis }) => axis === 2);
	const axes = left.filter(({ axis }) => axis === 0 || axis === 1);
	const findings = exchanged.map((pair) => swapFinding(base, names, pair));
	if (heights.length > 0) {
		findings.push({
			code: 'target-height',
			pairs: heights.map(({ pair }) => names[pair]!),
			message: `${list(heights.map(({ pair, metres }) => `“${names[pair]}” is ${millimetres(metres[2])} too ${metres[2] > 0 ? 'high' : 'low'}`))}, and fits in plan: check the target height.`,
			evidence: { misfits: misfitsOf(names, heights) },
		});
	}
	if (axes.length > 0) {
		findings.push({
			code: 'one-axis',
			pairs: axes.map(({ pair }) => names[pair]!),
			message: `${list(axes.map(({ pair, axis, metres }) => `“${names[pair]}” is off by ${millimetres(metres[axis!]!)} in ${axisNames[axis!]}`))} alone: check that number for a slip of the pen.`,
			evidence: { misfits: misfitsOf(names, axes) },
		});
	}
	const named = [heights.length, axes.length, exchanged.length * 2].includes(best.accused.length);
	if (!named && left.length > 0) {
		findings.push({
			code: 'blunder',
			pairs: left.map(({ pair }) => names[pair]!),
			message: `${list(left.map(({ pair, metres }) => `“${names[pair]}” is off by ${millimetres(Math.hypot(...metres))}`))} from where the other ${base.observations.count - best.accused.length} pairs, which agree, put ${left.length === 1 ? 'it' : 'them'}: set aside or measure again.`,
			evidence: { misfits: misfitsOf(names, left), agreeing: base.observations.count - best.accused.length },
		});
	}
	return findings;
}

/** Pairs among the accused that fit once their labels are changed over. */
function exchangedAmong(base: FitTrial, best: Explanation): [number, number][] {
	const found: [number, number][] = [];
	const accused = best.accused.map(({ pair }) => pair);
	const unit = base.observations.sigmaGiven ? 1 : best.trial.objective / best.trial.redundancy;
	for (const a of accused) {
		for (const b of accused) {
			if (b <= a || found.flat().some((pair) => pair === a || pair === b)) continue;
			const exchanged = exchangeControl(base.observations, a, b);
			if ([a, b].every((pair) => prediction(exchanged, best.trial.adjustment, pair) < EXCHANGE_LIMIT * unit)) found.push([a, b]);
		}
	}
	return found;
}

function doubtfulFinding(names: readonly string[], best: Explanation, rivals: readonly Explanation[]): Finding {
	const stories = [best, ...rivals];
	const codes = new Set(stories.map(codeOf));
	const [only] = codes;
	// An effect accuses nobody, so the finding bears its name where it tells the residuals best.
	const code = best.effects.length > 0 ? codeOf(best) : codes.size === 1 && only !== undefined ? only : 'blunder';
	const words = stories.slice(0, 4).map((story) => storyWords(names, story));
	return {
		code,
		pairs: [],
		message: `The pairs contradict each other, and several causes are as likely: ${words.join('; or ')}. Measure again before setting anything aside.`,
		evidence: {
			...(best.effects[0] ? effectEvidence(best.effects[0]) : {}),
			alternatives: stories.map((story) => ({
				code: codeOf(story),
				pairs: story.swapped ? story.swapped.map((pair) => names[pair]) : story.accused.map(({ pair }) => names[pair]),
				...(story.effects[0] ? effectEvidence(story.effects[0]) : {}),
			})),
		},
	};
}

function codeOf({ effects, swapped, accused }: Explanation): EffectCode | 'swapped-labels' | 'target-height' | 'one-axis' | 'blunder' {
	if (effects[0]) return effects[0].code;
	if (swapped) return 'swapped-labels';
	if (accused.every(({ axis }) => axis === 2)) return 'target-height';
	return accused.every(({ axis }) => axis === 0 || axis === 1) ? 'one-axis' : 'blunder';
}

const effectNames: Record<EffectCode, string> = {
	'grid-scale': 'a grid scale',
	'not-plumb': 'an instrument that was not plumb',
	'distance-constant': 'a constant on all distances',
};

function storyWords(names: readonly string[], story: Explanation): string {
	if (story.effects[0]) return effectNames[story.effects[0].code];
	if (story.swapped) return `${list(story.swapped.map((pair) => `“${names[pair]}”`))} exchanged`;
	return `${list(story.accused.map(({ pair }) => `“${names[pair]}”`))} off`;
}

function misfitsOf(names: readonly string[], accused: Explanation['accused']): unknown[] {
	return accused.map(({ pair, metres }) => ({ pair: names[pair], metres }));
}

function millimetres(metres: number): string {
	const size = Math.abs(metres);
	return size < 1 ? `${(size * 1000).toFixed(0)} mm` : `${size.toFixed(3)} m`;
}

function list(words: readonly string[]): string {
	return words.length < 2 ? (words[0] ?? '') : `${words.slice(0, -1).join(', ')} and ${words.at(-1)}`;
}
