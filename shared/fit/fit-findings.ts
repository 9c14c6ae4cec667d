import type { Adjustment } from './adjust.ts';
import { AS_GOOD, contradicts, type Explanation, explanations } from './explanations.ts';
import { accusationFindings, contradictionFinding, effectFinding, mirroredFinding, swapFinding, unitFinding } from './finding-words.ts';
import type { FitObservations } from './fit-observations.ts';
import type { Finding, FitInput } from './fit-schema.ts';
import { type FitTrial, misfitScore, testFit, tryFit } from './fit-trial.ts';
import { geometryFindings } from './geometry-findings.ts';
import { axisMistakes, unitRatios } from './gross-mistakes.ts';
import { systematicEffects } from './systematic-effects.ts';
import { standing, withOtherHeights } from './unequal-axes.ts';

/**
 * What a surveyor should know before trusting the fit. Proposals: the numbers of the fit stay as they are. The most telling cause comes alone:
 * other units and exchanged axes first, then the story that tells the residuals best; where several are as good, nobody is accused.
 * @param names of the pairs in the fit, in the order of the observations
 */
export function fitFindings(input: FitInput, names: readonly string[], observations: FitObservations, adjustment: Adjustment): Finding[] {
	const findings = geometryFindings(input, observations, adjustment);
	const base = testFit(observations, adjustment);
	if (base.redundancy < 1) return findings;
	const ratios = unitRatios(base);
	if (ratios.length > 0) return [...findings, unitFinding(ratios)];
	const mistakes = axisMistakes(base);
	if (mistakes.length > 0) return [...findings, mirroredFinding(mistakes)];
	const raised = judge(base, names, input);
	if (raised.length === 0 || observations.sigmaGiven || input.fit === 'height') return [...findings, ...raised];
	const others = withOtherHeights(observations).map((other) => {
		const trial = tryFit(other);
		return trial === null ? [] : judge(trial, names, input);
	});
	return [...findings, ...standing(raised, others)];
}

function judge(base: FitTrial, names: readonly string[], input: FitInput): Finding[] {
	return contradicts(base) ? contradictionFindings(base, names, input) : effectFindings(base, input);
}

/** The residuals agree: a systematic effect may still be plain in them together. */
function effectFindings(base: FitTrial, input: FitInput): Finding[] {
	const effects = systematicEffects(base, input.station);
	const [first, ...others] = effects;
	if (!first) return [];
	const score = misfitScore(first.corrected, base) + 4 * first.values.length;
	// One axis of one pair may tell the same better: then it is no effect, and too little to accuse the pair.
	if (scoreOfWorstAxis(base) < score) return [];
	const remaining = systematicEffects(first.corrected, input.station).map(({ code }) => code);
	const rivals = others.filter(
		(other) => !remaining.includes(other.code) && misfitScore(other.corrected, base) + 4 * other.values.length - score < AS_GOOD,
	);
	const further = systematicEffects(first.corrected, input.station).filter(({ code, notable }) => notable && code !== first.code);
	if (!first.notable && rivals.every(({ notable }) => !notable)) return further.map((effect) => effectFinding([effect]));
	return [effectFinding([first, ...rivals]), ...further.map((effect) => effectFinding([effect]))];
}

/** The score of the story that frees the axis with the worst residual. */
function scoreOfWorstAxis(base: FitTrial): number {
	const left = base.observations.sigmaGiven
		? base.objective - base.worst ** 2
		: base.objective * Math.max(1 - base.worst ** 2 / base.redundancy, 1e-12);
	return (
		misfitScore(
			{ ...base, objective: left, redundancy: base.observations.sigmaGiven ? base.redundancy : Math.max(base.redundancy - 1, 1) },
			base,
		) + 4
	);
}

/** The residuals contradict each other: the best story, or the best ones side by side. */
function contradictionFindings(base: FitTrial, names: readonly string[], input: FitInput): Finding[] {
	const stories = explanations(base, input.station);
	const lowest = stories[0];
	if (!lowest) return [contradictionFinding(base, names)];
	const asGood = stories.filter((story) => story.score - lowest.score < AS_GOOD);
	// Exchanged labels tell more than two pairs that are off, where both speak of the same two.
	const best =
		asGood.find(
			({ swapped }) =>
				swapped &&
				sameNumbers(
					swapped,
					lowest.accused.map(({ pair }) => pair),
				),
		) ?? lowest;
	const rivals = asGood.filter(
		(story) => story !== best && !accusesTheSameAndMore(story, best) && !(best.effects.length > 0 && story.accused.length > 1),
	);
	const minority = best.accused.length * 2 >= base.observations.count;
	if (best.effects.length > 0 && best.effects.some(({ notable }) => notable)) {
		const sameLength = rivals.filter((story) => story.effects.length > 0);
		if (rivals.length === sameLength.length) {
			const [first, ...rest] = best.effects;
			const others = sameLength
				.flatMap((story) => story.effects.slice(0, 1))
				.filter(({ code }) => best.effects.every((effect) => effect.code !== code));
			return [effectFinding([first!, ...others]), ...rest.map((effect) => effectFinding([effect]))];
		}
	}
	if (rivals.length > 0 || minority) return accusationFindings(base, names, best, rivals, true);
	if (best.swapped) return [swapFinding(base, names, best.swapped)];
	const after = systematicEffects(best.trial, input.station).filter(({ notable }) => notable);
	return [...accusationFindings(base, names, best, [], false), ...after.slice(0, 1).map((effect) => effectFinding([effect]))];
}

function sameNumbers(a: readonly number[], b: readonly number[]): boolean {
	return a.length === b.length && a.every((value) => b.includes(value));
}

/** The rival accuses the same pairs and more, or the same effects and more: no other story. */
function accusesTheSameAndMore(story: Explanation, best: Explanation): boolean {
	if (best.effects.length > 0) return best.effects.every(({ code }) => story.effects.some((effect) => effect.code === code));
	if (best.swapped) {
		const [a, b] = best.swapped;
		return story.accused.length > 0 && [a, b].every((pair) => story.accused.some((one) => one.pair === pair));
	}
	return best.accused.length > 0 && best.accused.every(({ pair }) => story.accused.some((one) => one.pair === pair));
}
