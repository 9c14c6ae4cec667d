import { describe, expect, it } from 'vitest';
import { adjustSetups } from '#shared/fit/adjust-setups.ts';
import { carryPoint, fitCovarianceAt } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { KnownMark, SetupSightings } from '#shared/fit/start-setups.ts';
import { turnAfter } from '#shared/geometry/rotation.ts';
import { place, surveyScene, surveySigma, type Triple } from './survey-scene.ts';

function oneSetup(
	seed: number,
	fit: 'levelled' | 'free',
): { setup: SetupSightings; known: KnownMark[]; single: ReturnType<typeof computeFit> } {
	const { input } = surveyScene(seed, fit, 6);
	return {
		setup: {
			name: 'A',
			fit,
			sightings: input.pairs.map(({ name, survey, surveySigma: sigma }) => ({ mark: name, survey: survey as Triple, sigma: sigma! })),
		},
		known: input.pairs.map(({ name, control, controlSigma: sigma }) => ({ mark: name, control: control as Triple, sigma: sigma! })),
		single: computeFit(input, { findings: false }),
	};
}

describe('set-ups adjusted together', () => {
	it.each(['levelled', 'free'] as const)('%s: with one set-up it is the fit itself, by another algorithm', (fit) => {
		for (let seed = 1; seed <= 5; seed++) {
			const { setup, known, single } = oneSetup(seed, fit);
			const joint = adjustSetups([setup], known);
			if (!joint.ok || !single.ok) throw new Error('refused');
			const [own] = joint.adjusted.fits;
			expect(joint.adjusted.redundancy).toBe(single.result.redundancy);
			expect(joint.adjusted.chiSquare!.statistic / single.result.chiSquare!.statistic).toBeCloseTo(1, 8);
			const point: Triple = [5, -6, 7];
			carryPoint(own!.fit, point).forEach((value, k) => {
				expect(Math.abs(value - carryPoint(single.result, point)[k]!)).toBeLessThan(1e-7);
			});
			const size = fitCovarianceAt(single.result, point)[2]![2]!;
			fitCovarianceAt(own!.fit, point).forEach((row, k) => {
				// Both linearise, but one at the adjusted marks and the other at the adjusted survey.
				row.forEach((value, l) => {
					expect(Math.abs(value - fitCovarianceAt(single.result, point)[k]![l]!)).toBeLessThan(1e-3 * size);
				});
			});
		}
	});

	it('stands a set-up with one known mark on the targets that another one saw', () => {
		const { setup, known } = oneSetup(3, 'levelled');
		const { trueSurvey, rotation } = surveyScene(3, 'levelled', 6);
		const turn = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
		turnAfter(turn, 0, 0, 1.1);
		const away: Triple[] = [...trueSurvey.slice(0, 2), [50, 4, 2], [44, -20, 3]];
		const extra: Triple[] = away.slice(2);
		const first: SetupSightings = {
			...setup,
			sightings: [...setup.sightings, ...extra.map((survey, i) => ({ mark: `X${i}`, survey, sigma: surveySigma }))],
		};
		const second: SetupSightings = {
			name: 'B',
			fit: 'levelled',
			sightings: [setup.sightings[0]!.mark, 'only-here', 'X0', 'X1'].map((mark, i) => ({
				mark,
				survey: place(turn, 1, away[i]!, [3, 4, 5]),
				sigma: surveySigma,
			})),
		};
		const joint = adjustSetups([second, first], known);
		if (!joint.ok) throw new Error(joint.refusal.message);
		const b = joint.adjusted.fits.find(({ setup: name }) => name === 'B')!.fit;
		const truth = place(rotation, 1, [47, -8, 2]);
		carryPoint(b, place(turn, 1, [47, -8, 2], [3, 4, 5])).forEach((value, k) => {
			expect(Math.abs(value - truth[k]!)).toBeLessThan(4 * Math.sqrt(fitCovarianceAt(b, place(turn, 1, [47, -8, 2], [3, 4, 5]))[k]![k]!));
		});
		// Further from the control, and through the errors of the ties: less sure than the first.
		const a = joint.adjusted.fits.find(({ setup: name }) => name === 'A')!.fit;
		expect(fitCovarianceAt(b, b.origin)[0]![0]!).toBeGreaterThan(fitCovarianceAt(a, a.origin)[0]![0]!);
		expect(joint.adjusted.marks.map(({ mark }) => mark)).toContain('X1');
		expect(joint.adjusted.chiSquare!.statistic).toBeLessThan(3 * joint.adjusted.redundancy);
	});

	it('refuses a set-up that hangs in the air, and σ of zero', () => {
		const { setup, known } = oneSetup(2, 'free');
		const loose: SetupSightings = { name: 'L', fit: 'free', sightings: [{ mark: 'T1', survey: [1, 2, 3], sigma: surveySigma }] };
		const joint = adjustSetups([setup, loose], known);
		expect(!joint.ok && joint.refusal.code).toBe('too-few-pairs');
		const exact = adjustSetups(
			[setup],
			known.map((mark) => ({ ...mark, sigma: [0, 0, 0] as Triple })),
		);
		expect(!exact.ok && exact.refusal.code).toBe('bad-sigma');
		expect(adjustSetups([], []).ok).toBe(false);
	});
});
