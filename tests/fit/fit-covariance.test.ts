import { describe, expect, it } from 'vitest';
import { carryPoint, fitCovarianceAt, fitCovarianceBetween } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput, FitKind } from '#shared/fit/fit-schema.ts';
import { controlSigma, surveyScene, surveySigma, type Triple } from './survey-scene.ts';

/** What the covariance claims, against what repeated measurement does. */

const RUNS = 1500;

describe('the covariance of the fit', () => {
	it.each<FitKind>(['levelled', 'levelled-scaled', 'free', 'free-scaled'])('%s: is the scatter of 1500 repeated surveys', (kind) => {
		const scene = surveyScene(42, kind, 5);
		const { input, trueSurvey, trueControl, normal } = scene;
		const [p, q]: [Triple, Triple] = [
			[12, -9, 4],
			[-25, 3, 1],
		];
		const repeat = (): FitInput => ({
			...input,
			pairs: input.pairs.map((pair, i) => ({
				...pair,
				survey: trueSurvey[i]!.map((value, k) => value + surveySigma[k]! * normal()) as Triple,
				control: trueControl[i]!.map((value, k) => value + controlSigma[k]! * normal()) as Triple,
			})),
		});
		const places: number[][] = [];
		let statistic = 0;
		for (let run = 0; run < RUNS; run++) {
			const outcome = computeFit(repeat(), { findings: false });
			if (!outcome.ok) throw new Error(outcome.refusal.message);
			places.push([...carryPoint(outcome.result, p), ...carryPoint(outcome.result, q)]);
			statistic += outcome.result.chiSquare!.statistic / RUNS;
		}
		const mean = places[0]!.map((_, k) => places.reduce((sum, place) => sum + (place[k]! - places[0]![k]!), 0) / RUNS + places[0]![k]!);
		const scatter = (k: number, l: number): number =>
			places.reduce((sum, place) => sum + (place[k]! - mean[k]!) * (place[l]! - mean[l]!), 0) / (RUNS - 1);
		const outcome = computeFit(input, { findings: false });
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		const fit = outcome.result;
		const at = fitCovarianceAt(fit, p);
		const between = fitCovarianceBetween(fit, p, q);
		const other = fitCovarianceAt(fit, q);
		for (let k = 0; k < 3; k++) {
			// The scatter of a variance from 1500 repeats is 3.7 %; four of them.
			expect(Math.abs(scatter(k, k) / at[k]![k]! - 1)).toBeLessThan(0.15);
			for (let l = 0; l < 3; l++) {
				const size = Math.sqrt(at[k]![k]! * other[l]![l]!);
				expect(Math.abs(scatter(k, 3 + l) - between[k]![l]!)).toBeLessThan(0.15 * size);
			}
		}
		expect(Math.abs(statistic / fit.redundancy - 1)).toBeLessThan(4 * Math.sqrt(2 / fit.redundancy / RUNS));
	});
});
