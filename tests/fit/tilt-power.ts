/**
 * How often a tilted instrument is named: `npx tsx tests/fit/tilt-power.ts SETS [sigma|none] [FROM]`. Levelled sets of 4 to 12 pairs, 20 to 80 m
 * across, tilted by 10 to 300″ about any level axis. One line for each class of theoretical power, the non-central χ² with 2 degrees beyond the
 * level of the test: what was named, what was said instead.
 */

import { addParameters } from '#shared/fit/added-parameters.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import { observationsOf } from '#shared/fit/fit-observations.ts';
import { tryFit } from '#shared/fit/fit-trial.ts';
import { TILT_LEVEL, tiltColumns } from '#shared/fit/systematic-effects.ts';
import { chiSquareQuantile } from '#shared/geometry/chi-square.ts';
import { turnAfter } from '#shared/geometry/rotation.ts';
import { surveyScene, type Triple } from './survey-scene.ts';

const [sets = '200', sigma = 'sigma', first = '1'] = process.argv.slice(2);
const geometry = ['weak-geometry', 'far-from-targets', 'no-redundancy'];
const bound = chiSquareQuantile(1 - TILT_LEVEL, 2);
const classes = [0, 0.05, 0.5, 0.9, 0.99, 0.9999].map((from) => ({
	from,
	sets: 0,
	expected: 0,
	named: 0,
	said: {} as Record<string, number>,
}));
for (let k = 0; k < Number(sets); k++) {
	const seed = 3_000_000 + Number(first) + k;
	const scene = surveyScene(seed, 'levelled', 4 + (k % 9), { spread: 20 + 15 * (k % 5), sigmas: sigma === 'sigma' });
	const tiltRad = ((10 * 30 ** scene.random()) / 3600) * (Math.PI / 180);
	const bearing = 2 * Math.PI * scene.random();
	const tilt = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
	turnAfter(tilt, tiltRad * Math.cos(bearing), tiltRad * Math.sin(bearing), 0);
	const turned = (point: readonly (number | null)[]): Triple =>
		[0, 1, 2].map((row) => tilt[3 * row]! * point[0]! + tilt[3 * row + 1]! * point[1]! + tilt[3 * row + 2]! * point[2]!) as Triple;
	const pairs = scene.input.pairs.map((pair) => ({ ...pair, survey: turned(pair.survey) }));
	const outcome = computeFit({ fit: 'levelled', pairs });
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	const power = powerOf(noncentrality(scene.trueSurvey, scene.trueControl, turned));
	const group = classes.filter(({ from }) => power >= from).at(-1)!;
	group.sets++;
	group.expected += power;
	const codes = outcome.result.findings
		.filter(({ code }) => !geometry.includes(code))
		.map(({ code, pairs: named }) => `${code} ${named.length}`);
	const isNamed = codes.some((code) => code.startsWith('not-plumb'));
	if (isNamed) group.named++;
	else group.said[codes.join(', ') || 'nothing'] = (group.said[codes.join(', ') || 'nothing'] ?? 0) + 1;
	if (!isNamed && power > 0.99 && process.argv.includes('--show'))
		console.log(
			seed,
			k,
			pairs.length,
			(tiltRad * 206265).toFixed(0),
			power.toFixed(5),
			JSON.stringify(outcome.result.findings.map(({ code, pairs: p, evidence }) => [code, p, evidence.alternatives ?? null])),
		);
}
for (const { from, sets: count, expected, named, said } of classes) {
	console.log(JSON.stringify({ powerFrom: from, sets: count, expected: Math.round(10 * expected) / 10, named, said }));
}

/** What the tilt adds to F that the other unknowns do not take: the drop of the noiseless set, at the σ of the scenes. */
function noncentrality(survey: readonly Triple[], control: readonly Triple[], turned: (point: Triple) => Triple): number {
	const pairs = survey.map((point, i) => ({
		name: `T${i + 1}`,
		survey: turned(point),
		control: control[i]!,
		surveySigma: [0.002, 0.002, 0.003] as Triple,
		controlSigma: [0.0015, 0.0015, 0.004] as Triple,
	}));
	const trial = tryFit(observationsOf({ fit: 'levelled', pairs }, pairs));
	if (!trial) return 0;
	return addParameters(trial.observations, trial.adjustment, tiltColumns(trial))?.drop ?? 0;
}

/** The upper tail of the non-central χ² with 2 degrees at the bound: Poisson mixture of central ones (Abramowitz & Stegun 26.4.25). */
function powerOf(lambda: number): number {
	// With even degrees 2 + 2j the central tail is a finite sum: e^(−x/2)·Σ_{i ≤ j} (x/2)^i/i!.
	const half = bound / 2;
	let term = Math.exp(-half);
	let tail = term;
	let weight = Math.exp(-lambda / 2);
	let left = 1 - weight;
	let power = weight * tail;
	if (lambda > 200) return 1;
	for (let j = 1; j < 2000 && left > 1e-12; j++) {
		term *= half / j;
		tail += term;
		weight *= lambda / 2 / j;
		left -= weight;
		power += weight * tail;
	}
	return Math.min(1, power);
}
